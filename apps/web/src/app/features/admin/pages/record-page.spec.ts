import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { Router, provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import { Session } from '../../../core/session';
import type { RecordEntry } from '../data/record';
import { RecordPage } from './record-page';

const entry = (sequence: number, change: Partial<RecordEntry> = {}): RecordEntry => ({
  sequence,
  at: '2026-11-03T13:00:00Z',
  actorId: 'p1',
  actorName: 'Admin',
  actorRoles: ['admin'],
  action: 'person.roles-changed',
  entity: 'person',
  entityId: 'p2',
  modelId: null,
  before: { roles: ['modeller'] },
  after: { roles: ['modeller', 'validator'] },
  detail: null,
  reason: 'Covers in November',
  withheld: false,
  hash: 'ab'.repeat(32),
  ...change,
});

describe('RecordPage', () => {
  let server: HttpTestingController;
  let harness: RouterTestingHarness;

  const page = (): HTMLElement => harness.routeNativeElement as HTMLElement;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    await harness.fixture.whenStable();
  }

  /** Lets a press take effect without waiting for the answer that it asks for. */
  async function pressed(label: string): Promise<void> {
    [...page().querySelectorAll('button')].find((button) => button.textContent?.trim() === label)?.click();
    await new Promise((resolve) => setTimeout(resolve));
    harness.fixture.detectChanges();
    await new Promise((resolve) => setTimeout(resolve));
  }

  async function answer(entries: RecordEntry[], next: number | null): Promise<URLSearchParams> {
    const request = server.expectOne((asked) => asked.url === '/api/record');
    request.flush({ entries, next });
    await settled();
    return new URLSearchParams(request.request.params.toString());
  }

  async function open(abilities: readonly string[]): Promise<void> {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([{ path: 'record', component: RecordPage }], withComponentInputBinding()),
      ],
    });
    server = TestBed.inject(HttpTestingController);
    const session = TestBed.inject(Session).load();
    server.expectOne('/api/session').flush({ user: null, abilities, demo: true });
    await session;
    harness = await RouterTestingHarness.create();
    void harness.navigateByUrl('/record?entity=person&from=2026-11-01');
    await new Promise((resolve) => setTimeout(resolve));
    harness.fixture.detectChanges();
  }

  async function openToVerify(): Promise<void> {
    await open(['record.read', 'record.verify']);
    server.expectOne('/api/record/head').flush({ sequence: 1240, hash: 'cd'.repeat(32) });
  }

  it('asks for the head of the chain only on behalf of those who may verify it', async () => {
    await open(['record.read']);
    await answer([entry(12)], null);
    server.expectNone('/api/record/head');
    expect(page().textContent).not.toContain('Head of the chain');
    expect(page().textContent).not.toContain('Verify the chain');
  });

  it('reads its filter from the address and shows before and after', async () => {
    await openToVerify();
    const asked = await answer([entry(12), entry(11)], 11);
    expect(asked.get('entity')).toBe('person');
    expect(asked.get('from')).toBe(new Date('2026-11-01T00:00:00').toISOString());
    expect(asked.has('before')).toBe(false);
    expect(page().textContent).toContain('2 entries shown, 11 to 12 of 1\u202F240.');
    const cells = [...page().querySelectorAll('details tbody tr:first-child > *')].slice(0, 3).map((cell) => cell.textContent);
    expect(cells).toEqual(['roles', 'modeller', 'modeller, validator']);
    expect(page().textContent).toContain('cd'.repeat(32));
  });

  it('goes to older entries by key, and starts again when the filter changes', async () => {
    await openToVerify();
    await answer([entry(12), entry(11)], 11);
    await pressed('Older entries');
    const older = await answer([entry(10, { withheld: true, before: null, after: null })], null);
    expect(older.get('before')).toBe('11');
    expect(page().textContent).toContain('is not open to you');
    await pressed('Admin');
    const narrowed = await answer([], null);
    expect(narrowed.get('actorId')).toBe('p1');
    expect(narrowed.has('before')).toBe(false);
    expect(TestBed.inject(Router).url).toBe('/record?entity=person&from=2026-11-01&actorId=p1');
    expect(page().textContent).toContain('No entry fits this filter.');
  });
});
