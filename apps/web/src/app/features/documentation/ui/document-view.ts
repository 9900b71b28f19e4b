import type { DocumentSummary } from '@tallystone/contracts/documents/schema';
import type { Version } from '@tallystone/contracts/versions/schema';
import { moment, plural } from '../../../ui/numbers';

/** The sentence over the documents of one version: the newest edition, or that there is none. */
export function versionDocumentsFinding(documents: readonly DocumentSummary[]): string {
  const [latest] = [...documents].sort((a, b) => b.number - a.number);
  if (!latest) return 'No document yet: nothing of this version has been printed.';
  return `Edition ${latest.number}, ${plural(latest.pages, 'page')}, made ${moment(latest.madeAt)} by ${latest.madeBy}, is the latest.`;
}

/** The sentence over the documents of every model. */
export function documentsFinding(documents: readonly DocumentSummary[]): string | null {
  if (documents.length === 0) return null;
  const models = new Set(documents.map(({ modelId }) => modelId)).size;
  return `${plural(documents.length, 'document')} of ${plural(models, 'model')}, kept as ${documents.length === 1 ? 'it was' : 'they were'} made.`;
}

/** What happened to the version after its newest document was made, in words; null while the document is up to date or there is none. */
export function staleness(documents: readonly DocumentSummary[], version: Pick<Version, 'acts'>): string | null {
  const [latest] = [...documents].sort((a, b) => b.number - a.number);
  const last = version.acts[version.acts.length - 1];
  if (!latest || !last || last.at <= latest.madeAt) return null;
  return `The version has moved on since edition ${latest.number}. Make a new edition, so that the document says so.`;
}
