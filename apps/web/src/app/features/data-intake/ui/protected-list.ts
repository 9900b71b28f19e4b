import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import type { PermissionAct, ProtectedColumn, ProtectedColumns } from '@tallystone/contracts/permissions/schema';
import { StatusMark } from '../../../ui/status-mark';
import { actWords, standingWords, unflaggedWords } from './protected-words';

/** What of a confirmed definition is protected, who permitted what with which citation, and what is flagged no longer. */
@Component({
  selector: 'ts-protected-list',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, StatusMark],
  template: `
    <h4>Protected columns</h4>
    <ul aria-label="Protected columns">
      @for (column of protection().columns; track column.column) {
        <li>
          <p>
            <b>{{ column.column }}</b>
            @if (column.role === 'characteristic') {
              <ts-status [tone]="column.permission ? 'kept' : 'refused'">{{ column.permission ? 'permitted' : 'barred' }}</ts-status>
            }
          </p>
          <p>{{ standing(column) }}</p>
          @if (column.proposed && !column.permission) {
            <p class="ts-second">Proposed by the modeller: “{{ column.proposed }}”. A proposal permits nothing.</p>
          }
          @for (entry of earlier(column); track entry.id) {
            <p class="ts-caption">{{ said(entry) }}</p>
          }
          @if (mayAct() && column.role === 'characteristic') {
            <div class="ts-actions">
              @if (!column.permission) {
                <button matButton="outlined" type="button" [attr.aria-label]="'Permit ' + column.column" (click)="permit.emit(column)">Permit…</button>
              } @else if (column.frozenIn.length === 0) {
                <button matButton type="button" [attr.aria-label]="'Withdraw the permission of ' + column.column" (click)="withdraw.emit(column)">Withdraw…</button>
              }
            </div>
          }
        </li>
      }
      @for (column of protection().unflagged; track column.column) {
        <li>
          <p>
            <b>{{ column.column }}</b> <ts-status tone="waiting">flagged no longer</ts-status>
          </p>
          <p>{{ gone(column) }}</p>
        </li>
      }
    </ul>
    <p class="ts-caption">
      Which attributes are protected, and what may permit one, is for the law that applies to the lender and for its qualified legal and compliance
      staff. Each act is recorded and printed in the governance document.
    </p>
  `,
  styles: `
    :host {
      display: grid;
      gap: 6px;
    }
    ul {
      list-style: none;
      display: grid;
      gap: 14px;
    }
    li {
      display: grid;
      gap: 4px;
      overflow-wrap: anywhere;
    }
    b {
      margin-right: 6px;
    }
  `,
})
export class ProtectedList {
  readonly protection = input.required<ProtectedColumns>();
  readonly permit = output<ProtectedColumn>();
  readonly withdraw = output<ProtectedColumn>();
  protected readonly mayAct = computed(() => this.protection().abilities.includes('permit'));
  protected readonly standing = standingWords;
  protected readonly said = actWords;
  protected readonly gone = unflaggedWords;

  /** Acts that do not hold any more, the latest first. */
  protected earlier({ column, permission }: ProtectedColumn): PermissionAct[] {
    return this.protection()
      .acts.filter((entry) => entry.column === column && entry.id !== permission?.id)
      .reverse();
  }
}
