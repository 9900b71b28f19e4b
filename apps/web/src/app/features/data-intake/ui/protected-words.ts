import type { PermissionAct, ProtectedColumn, UnflaggedColumn } from '@tallystone/contracts/permissions/schema';
import { moment } from '../../../ui/numbers';

/** How a protected column stands: barred, permitted, or of no matter for a fit. */
export function standingWords({ role, permission, frozenIn }: ProtectedColumn): string {
  if (role !== 'characteristic') return `It has the role “${role}” and enters no binning and no fit.`;
  if (permission === null)
    return 'Barred from every binning and fit until somebody with the role of compliance permits it, with a citation.';
  const frozen = frozenIn.length === 0 ? '' : ` Version ${frozenIn.join(', ')} was frozen with it: that can no longer be withdrawn.`;
  return `${actWords(permission)}${frozen} A binning made from now on classes it.`;
}

/** One act with who, when, and what was cited. */
export const actWords = ({ act, citation, reason, by, at }: PermissionAct): string =>
  act === 'permitted'
    ? `Permitted by ${by}, ${moment(at)}, with “${citation}”. ${full(reason)}`
    : `“${citation}” withdrawn by ${by}, ${moment(at)}. ${full(reason)}`;

export const unflaggedWords = ({ role, reason, sample, definition }: UnflaggedColumn): string =>
  `Definition ${definition} of sample ${sample} flags it protected; this one does not, and takes it as “${role}”. ${reason === null ? 'No reason is given.' : full(reason)}`;

const full = (text: string): string => (/[.!?]$/.test(text) ? text : `${text}.`);
