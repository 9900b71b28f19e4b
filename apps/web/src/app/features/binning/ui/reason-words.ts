import type { EditReason } from '@tallystone/contracts/binnings/edits';

/** Reasons as people read them, in the order of the list. */
export const reasons: readonly { readonly code: EditReason['code']; readonly label: string }[] = [
  { code: 'trend known from experience', label: 'Trend known from experience' },
  { code: 'holds better in hold-out', label: 'Holds better in hold-out' },
  { code: 'bin too small', label: 'Bin too small' },
  { code: 'limit used in policy', label: 'Limit used in policy' },
  { code: 'round number', label: 'Round number' },
  { code: 'categories alike', label: 'Categories alike' },
  { code: 'quality of the data', label: 'Quality of the data' },
  { code: 'other', label: 'Another reason' },
];

/** A reason in words: the choice, with what was written to it. @example reasonWords({ code: 'other', text: 'Few of them' }) // 'Few of them' */
export function reasonWords({ code, text }: EditReason): string {
  const label = reasons.find((reason) => reason.code === code)?.label ?? code;
  return code === 'other' ? text : text ? `${label}: ${text}` : label;
}
