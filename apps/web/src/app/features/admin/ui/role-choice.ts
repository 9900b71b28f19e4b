import { ChangeDetectionStrategy, Component, model } from '@angular/core';
import { MatCheckboxModule } from '@angular/material/checkbox';
import type { Role } from '@tallystone/contracts/people/schema';
import { allRoles, roleWords } from './roles';

/** Roles to tick, each with what it lets a person do. */
@Component({
  selector: 'ts-role-choice',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatCheckboxModule],
  template: `
    <fieldset>
      <legend>Roles</legend>
      @for (role of roles; track role) {
        <mat-checkbox [checked]="chosen().includes(role)" (change)="toggle(role, $event.checked)">
          <span
            ><b>{{ words[role].name }}</b> <span class="ts-second">{{ words[role].does }}</span></span
          >
        </mat-checkbox>
      }
    </fieldset>
  `,
  styles: `
    fieldset {
      display: grid;
    }
    b {
      font-weight: 600;
    }
  `,
})
export class RoleChoice {
  readonly chosen = model.required<readonly Role[]>();
  protected readonly roles = allRoles;
  protected readonly words = roleWords;

  protected toggle(role: Role, on: boolean): void {
    const without = this.chosen().filter((entry) => entry !== role);
    this.chosen.set(on ? [...without, role] : without);
  }
}
