import { TestBed } from '@angular/core/testing';
import { DraftStore } from './draft-store';
import { Problem } from '../../../core/http/problem';
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

describe('a draft that somebody else saved first', () => {
  const start: DraftContent = {
    columns: [],
    outcome: { good: [], bad: [], indeterminate: [], excluded: [] },
    declined: null,
    exclusions: [],
    partition: { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null },
  };
  const staff = { reason: 'Staff', combine: 'all' as const, tests: [] };
  const branch = { reason: 'Branch', combine: 'all' as const, tests: [] };
  const seeded = (seed: number): DraftContent => ({
    ...start,
    partition: { by: 'seed', seed, holdOutShare: 0.3, outOfTime: null },
  });
  let there: Draft;
  const save = (content: DraftContent, savedBy: string): Draft =>
    (there = { content, revision: there.revision + 1, savedAt: '2026-01-01T00:00:00Z', savedBy, problems: [] });
  const tagged = () => ({ value: there, etag: `"${there.revision}"` });
  const samples = {
    draft: () => Promise.resolve(tagged()),
    saveDraft: (_model: string, _sample: string, sent: DraftContent, etag: string) => {
      if (etag !== tagged().etag) return Promise.reject(new Problem(412, 'stale', 'Changed meanwhile', '', []));
      save(sent, 'Mara');
      return Promise.resolve(tagged());
    },
  };
  let store: DraftStore;
  const change = async (content: DraftContent): Promise<void> => {
    store.change(() => content);
    await store.flush();
  };

  beforeEach(async () => {
    there = { content: start, revision: 1, savedAt: '', savedBy: 'Mara', problems: [] };
    TestBed.configureTestingModule({ providers: [DraftStore, { provide: Samples, useValue: samples }] });
    store = TestBed.inject(DraftStore);
    await store.open('m1', 's1');
    save({ ...start, exclusions: [staff] }, 'Nils');
  });

  it('is read, while mine stays and is not saved', async () => {
    await change(seeded(7));
    expect([store.saveState(), store.theirs()?.savedBy, store.theirs()?.content.exclusions]).toEqual(['stale', 'Nils', [staff]]);
    expect([store.before(), store.content()]).toEqual([start, seeded(7)]);
    await change(seeded(8));
    expect([store.saveState(), there.content.exclusions, store.content()]).toEqual(['stale', [staff], seeded(8)]);
  });

  it('is kept with mine where we changed different things', async () => {
    await change(seeded(7));
    await store.keepBoth();
    expect(there.content).toEqual({ ...seeded(7), exclusions: [staff] });
    expect([store.saveState(), store.content(), store.theirs(), store.setAside()]).toEqual(['saved', there.content, null, null]);
  });

  it('cannot be kept with mine where we changed the same', async () => {
    await change({ ...start, exclusions: [branch] });
    expect(store.both()).toBeNull();
    await store.keepBoth();
    expect([store.saveState(), there.content.exclusions]).toEqual(['stale', [staff]]);
  });

  it('gives way to mine and can be had back, and so can mine again', async () => {
    await change({ ...start, exclusions: [branch] });
    await store.keepMine();
    expect([store.saveState(), there.content.exclusions, store.setAside()?.whose]).toEqual(['saved', [branch], 'theirs']);
    store.bringBack();
    await store.flush();
    expect([store.saveState(), there.content.exclusions, store.setAside()?.whose]).toEqual(['saved', [staff], 'mine']);
    store.bringBack();
    await store.flush();
    expect(there.content.exclusions).toEqual([branch]);
  });

  it('is taken, and mine can be had back', async () => {
    await change(seeded(7));
    await store.takeTheirs();
    expect([store.saveState(), store.content(), store.setAside()?.whose]).toEqual(['saved', there.content, 'mine']);
    store.bringBack();
    await store.flush();
    expect(there.content).toEqual(seeded(7));
  });

  it('is asked about once more where it was saved again before mine was', async () => {
    await change({ ...start, exclusions: [branch] });
    save({ ...start, exclusions: [staff, branch] }, 'Olga');
    await store.keepMine();
    expect([store.saveState(), store.theirs()?.savedBy, store.setAside()]).toEqual(['stale', 'Olga', null]);
    expect([there.content.exclusions, store.content()?.exclusions]).toEqual([[staff, branch], [branch]]);
  });

  it('is taken without a word where both made the same change', async () => {
    await change({ ...start, exclusions: [staff] });
    expect([store.saveState(), store.revision(), store.theirs()]).toEqual(['saved', 2, null]);
  });
});
