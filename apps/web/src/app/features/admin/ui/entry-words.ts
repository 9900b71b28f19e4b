import type { RecordEntry } from '@tallystone/contracts/record/schema';

/** "person.roles-changed" reads "Person: roles changed"; the record's own names stay recognisable. */
export function actionWords(action: string): string {
  const [entity, act = ''] = action.split('.');
  const words = act.replaceAll('-', ' ');
  return `${entity[0].toUpperCase()}${entity.slice(1).replaceAll('-', ' ')}${words ? `: ${words}` : ''}`;
}

/** One thing that an act changed or noted. */
export interface ChangedField {
  readonly field: string;
  readonly before: string | null;
  readonly after: string | null;
  readonly changed: boolean;
}

/** Before and after field by field, each field once, in the order they are stored. */
export function changedFields(before: unknown, after: unknown): ChangedField[] {
  const old = flat(before);
  const now = flat(after);
  return [...new Set([...old.keys(), ...now.keys()])].map((field) => {
    const one = old.get(field) ?? null;
    const other = now.get(field) ?? null;
    return { field, before: one, after: other, changed: one !== other };
  });
}

/** True when an act says what was there before or after. */
export function saysWhatChanged(entry: Pick<RecordEntry, 'before' | 'after'>): boolean {
  return (entry.before ?? entry.after ?? null) !== null;
}

/** What an act noted beside it: address, kind, counts. */
export function notedFields(entry: Pick<RecordEntry, 'detail'>): { readonly field: string; readonly value: string }[] {
  return [...flat(entry.detail)].map(([field, value]) => ({ field, value }));
}

function flat(value: unknown): Map<string, string> {
  if (value === null || value === undefined) return new Map();
  if (typeof value !== 'object' || Array.isArray(value)) return new Map([['value', text(value)]]);
  return new Map(Object.entries(value).map(([key, entry]) => [fieldWords(key), text(entry)]));
}

function text(value: unknown): string {
  if (value === null || value === undefined || value === '') return 'none';
  if (Array.isArray(value)) return value.length === 0 ? 'none' : value.map(text).join(', ');
  return typeof value === 'string' ? value : JSON.stringify(value);
}

/** "materialityTier" reads "materiality tier". */
function fieldWords(key: string): string {
  return key.replace(/([a-z0-9])([A-Z])/g, '$1 $2').toLowerCase();
}
