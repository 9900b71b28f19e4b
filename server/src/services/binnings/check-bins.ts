import type { Bins, Fine } from '@tallystone/contracts/binnings/bins';
import type { SentEdit } from '@tallystone/contracts/binnings/edits';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { coarseCount } from '@tallystone/numeric/bench';
import canonicalize from 'canonicalize';

const item = (code: string, message: string, field = 'bins'): ProblemItem => ({ code, message, where: { field } });

export const sameBins = (a: Bins, b: Bins): boolean => canonicalize(a) === canonicalize(b);

/** Everything that is wrong with bins for a characteristic with these fine classes. */
export function checkBins(fine: Fine, bins: Bins): ProblemItem[] {
  if (bins.kind !== fine.kind) return [item('wrong-kind', `This characteristic is ${fine.kind}.`)];
  const problems: ProblemItem[] = [];
  if (bins.special.length !== fine.special.length) {
    problems.push(
      item('special-codes', `It has ${fine.special.length} special codes; say for each where it goes.`, 'bins.special'),
    );
  }
  const coarse = coarseCount(bins);
  const places = [...bins.special, bins.missing, ...(bins.kind === 'categorical' ? [bins.unseen] : [])];
  for (const place of places) {
    if (typeof place === 'number' && place >= coarse)
      problems.push(item('no-such-bin', `There is no bin ${place} to join: the last one is ${coarse - 1}.`));
  }
  if (bins.kind === 'numeric') {
    const known = new Set(fine.edges);
    bins.edges.forEach((edge, index) => {
      if (index > 0 && edge <= bins.edges[index - 1])
        problems.push(item('not-ascending', `The cut at ${edge} is not above the one before it.`, 'bins.edges'));
      if (!known.has(edge))
        problems.push(
          item(
            'cut-inside-fine-class',
            `The cut at ${edge} lies inside a fine class. Split the fine class there first.`,
            'bins.edges',
          ),
        );
    });
  } else {
    const listed = bins.groups.flat();
    const known = new Set(fine.categories);
    for (const category of new Set(listed)) {
      if (!known.has(category))
        problems.push(item('no-such-category', `Development has no category "${category}".`, 'bins.groups'));
    }
    if (new Set(listed).size !== listed.length)
      problems.push(item('listed-twice', 'A category is in two groups.', 'bins.groups'));
    const left = fine.categories.filter((category) => !listed.includes(category));
    if (left.length > 0) problems.push(item('category-left', `In no group: ${left.slice(0, 5).join(', ')}.`, 'bins.groups'));
  }
  return problems;
}

/** Edits must lead from the automatic bins to those that are saved, each from where the one before ended: a record with no gap. */
export function checkEdits(automatic: Bins, bins: Bins, edits: readonly SentEdit[]): ProblemItem[] {
  const problems: ProblemItem[] = [];
  if (new Set(edits.map(({ id }) => id)).size !== edits.length)
    problems.push(item('listed-twice', 'An edit is listed twice.', 'edits'));
  let from = automatic;
  edits.forEach((edit, index) => {
    if (!sameBins(edit.before, from))
      problems.push(item('edits-do-not-join', `"${edit.what}" does not begin where the edit before it ended.`, `edits.${index}`));
    from = edit.after;
  });
  if (!sameBins(from, bins))
    problems.push(item('edits-do-not-lead', 'The edits do not lead to the bins that are saved.', 'edits'));
  return problems;
}
