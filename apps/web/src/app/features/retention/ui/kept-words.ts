import type { KeptSample, KeptUpload } from '@tallystone/contracts/samples/erasure';
import { bytes, count, plural } from '../../../ui/numbers';

const sentence = (parts: readonly string[]): string => (parts.length < 2 ? parts.join('') : `${parts.slice(0, -1).join(', ')} and ${parts[parts.length - 1]}`);

/** What the page says of all samples: how many rows are kept, how many samples were erased. */
export function keptFinding({ samples, uploads }: { readonly samples: readonly KeptSample[]; readonly uploads: readonly KeptUpload[] }): string {
  const kept = samples.filter(({ erased }) => erased === null);
  const erased = samples.length - kept.length;
  const rows = kept.reduce((sum, sample) => sum + (sample.rows ?? 0), 0);
  const unread = kept.filter((sample) => sample.rows === null).length;
  const first =
    kept.length === 0
      ? 'No row of any applicant is kept in this model'
      : `${plural(kept.length, 'sample')} with ${plural(rows, 'row')} ${kept.length === 1 ? 'is' : 'are'} kept${unread === 0 ? '' : `, ${count(unread)} of them not read yet`}`;
  const second = erased === 0 ? '' : `; the rows of ${erased === 1 ? 'one sample were' : `${count(erased)} samples were`} erased`;
  const third = uploads.length === 0 ? '' : `; ${plural(uploads.length, 'file')} ${uploads.length === 1 ? 'has' : 'have'} arrived in part`;
  return `${first}${second}${third}.`;
}

/** "1 definition, 2 binnings and 1 version", or that nothing rests on it. */
export function restingWords({ definitions, binnings, fits, versions }: KeptSample): string {
  const parts = [
    [definitions, 'definition'],
    [binnings, 'binning'],
    [fits, 'fit'],
    [versions, 'version'],
  ] as const;
  const there = parts.filter(([number]) => number > 0).map(([number, what]) => plural(number, what));
  return there.length === 0 ? 'nothing' : sentence(there);
}

/** What goes for good. */
export function goesWords({ fileName, size, rows }: KeptSample): string {
  const columns = rows === null ? '' : `, the ${plural(rows, 'row')} read from it`;
  return `The raw file ${fileName} (${bytes(size)})${columns}, and which row is in which partition and bin.`;
}

/** What follows for versions and for work under way. */
export function followsWords({ versions, runs }: KeptSample): string {
  const replicable = versions === 0 ? 'No version rests on these rows.' : `${plural(versions, 'version')} will no longer be replicable, and ${versions === 1 ? 'says' : 'say'} so on every page and in every document made from now on.`;
  const running = runs === 0 ? '' : ` ${plural(runs, 'run')} that ${runs === 1 ? 'reads' : 'read'} them will end.`;
  return `${replicable}${running} No new binning, fit, comparison or stability study can be made of this sample.`;
}

export const staysWords =
  'Counts, profiles without values that fewer than five rows hold, quality reports, bins and WOE, fits, points, versions with their evidence, documents, and the record of actions.';

export const backupWords = 'Copies of the database that were made before keep the rows until the operator’s own term for them ends.';
