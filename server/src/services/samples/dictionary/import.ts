import { withColumns } from '@tallystone/contracts/samples/role-holders';
import type { Transaction } from 'sequelize';
import type { Context } from '../../../context';
import type { Actor } from '../../../models/person';
import { invalid } from '../../../problems/problem';
import { findDraft, saveDraft } from '../draft';
import { dictionaryCsv, readDictionaryCsv } from './csv';
import { type FoundDictionary, writeDictionary } from './find';

/** The dictionary with the roles and special codes of the draft, as a file; only its heading before the file has been read. */
export async function dictionaryFile(context: Context, { sample, entries }: FoundDictionary): Promise<Buffer> {
  const draft = await findDraft(context, sample);
  return Buffer.from(`\ufeff${dictionaryCsv(draft?.content.columns ?? [], entries)}`, 'utf8');
}

/**
 * Takes a dictionary from a file, into the dictionary and into the draft.
 *
 * @throws Problem 422 with every problem of the file; nothing is then changed
 */
export async function importDictionary(
  context: Context,
  tx: Transaction,
  person: Actor,
  dictionary: FoundDictionary,
  text: string,
): Promise<FoundDictionary> {
  const draft = await findDraft(context, dictionary.sample, tx, true);
  const columns = draft?.content.columns ?? [];
  const { read, problems } = readDictionaryCsv(text, columns, dictionary.entries);
  if (!read) throw invalid(problems);
  if (draft && JSON.stringify(read.columns) !== JSON.stringify(columns))
    await saveDraft(context, tx, person, draft, withColumns(draft.content, read.columns));
  return writeDictionary(context.sequelize, tx, person, dictionary, read.entries, 'file');
}
