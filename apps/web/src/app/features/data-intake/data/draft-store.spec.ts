import { TestBed } from '@angular/core/testing';
import { DraftStore } from './draft-store';
import { type Draft, type DraftContent, Samples } from './samples';

describe('the draft when a page of its sample is opened again', () => {
  const content = (seed: number): DraftContent => ({
    columns: [],
    outcome: { good: [], bad: [], indeterminate: [], excluded: [] },
    declined: null,
    exclusions: [],
    partition: { by: 'seed', seed, holdOutShare: 0.3, outOfTime: null },
  });
  const draft = (revision: number): Draft => ({
    content: content(revision),
    revision,
    savedAt: '2026-01-01T00:00:00Z',
    savedBy: 'Marian',
    problems: [],
  });
  let now = 1;
  let wait: Promise<void> = Promise.resolve();
  const samples = {
    draft: async () => {
      const value = draft(now);
      await wait;
      return { value, etag: `"${value.revision}"` };
    },
    saveDraft: (_model: string, _sample: string, sent: DraftContent) =>
      Promise.resolve({ value: { ...draft(++now), content: sent }, etag: `"${now}"` }),
  };

  it('is what is there now', async () => {
    TestBed.configureTestingModule({ providers: [DraftStore, { provide: Samples, useValue: samples }] });
    const store = TestBed.inject(DraftStore);
    now = 1;
    await store.open('m1', 's1');
    now = 7;
    await store.open('m1', 's1');
    expect([store.revision(), store.content()]).toEqual([7, content(7)]);
  });

  it('keeps a change that was made while it was read', async () => {
    TestBed.configureTestingModule({ providers: [DraftStore, { provide: Samples, useValue: samples }] });
    const store = TestBed.inject(DraftStore);
    now = 1;
    await store.open('m1', 's1');
    let answer = (): void => undefined;
    wait = new Promise((resolve) => (answer = resolve));
    const opened = store.open('m1', 's1');
    store.change(() => content(42));
    answer();
    await opened;
    expect(store.content()).toEqual(content(42));
    await store.flush();
    expect([store.saveState(), store.revision(), store.content()]).toEqual(['saved', 2, content(42)]);
    wait = Promise.resolve();
  });
});
