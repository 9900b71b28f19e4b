import { dayBound } from '../data/record';
import { actionWords, changedFields, notedFields } from './entry-words';

describe('entries of the record', () => {
  it('read as words', () => {
    expect(actionWords('person.roles-changed')).toBe('Person: roles changed');
    expect(actionWords('out-of-time.opened')).toBe('Out of time: opened');
  });

  it('put before and after side by side and mark what changed', () => {
    expect(changedFields({ roles: ['modeller'], state: 'active' }, { roles: ['modeller', 'admin'], state: 'active' })).toEqual([
      { field: 'roles', before: 'modeller', after: 'modeller, admin', changed: true },
      { field: 'state', before: 'active', after: 'active', changed: false },
    ]);
    expect(changedFields(null, { materialityTier: 1, intendedUse: '' })).toEqual([
      { field: 'materiality tier', before: null, after: '1', changed: true },
      { field: 'intended use', before: null, after: 'none', changed: true },
    ]);
  });

  it('list what was noted, whatever its shape', () => {
    expect(notedFields({ detail: { address: null, counts: { rows: 3 } } })).toEqual([
      { field: 'address', value: 'none' },
      { field: 'counts', value: '{"rows":3}' },
    ]);
    expect(notedFields({ detail: null })).toEqual([]);
  });

  it('take a day whole', () => {
    const from = dayBound('2026-11-03', false);
    const to = dayBound('2026-11-03', true);
    expect(Date.parse(to ?? '') - Date.parse(from ?? '')).toBe(24 * 3600 * 1000);
    expect(dayBound('yesterday', false)).toBeNull();
  });
});
