import { AsyncLocalStorage } from 'node:async_hooks';
import { randomUUID } from 'node:crypto';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import { type ArrivedPart, fileLimits } from '@tallystone/contracts/samples/schema';
import { wholeFileHeader } from '@tallystone/contracts/samples/upload';
import { Metadata, Server } from '@tus/server';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import type { Actor } from '../../models/person';
import { RawFile, Sample } from '../../models/sample';
import { Problem, conflict, invalid } from '../../problems/problem';
import { sniff } from '../../reading/index';
import { type ArrivedFile, UploadFault, UploadStore } from '../../storage/uploadStore';
import type { FoundModel } from '../models/find-model';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';

const mostUnfinished = 10;
/** Unfinished uploads that nobody has sent to for a week are dropped when the next one begins. */
const keptDays = 7;

interface Receiver {
  readonly server: Server;
  readonly store: UploadStore;
}

const receivers = new WeakMap<Context, Receiver>();
/** SHA-256 of the whole file that the request under way states: the protocol has no place for it, and two requests for one upload keep theirs apart. */
const stated = new AsyncLocalStorage<string | null>();

/** What an upload is about: found before anything of the protocol is done. */
export interface FoundUpload {
  readonly id: string;
  readonly personId: string;
}

export async function findUpload(context: Context, modelId: string, uploadId: string): Promise<FoundUpload | null> {
  const [upload] = await rows<FoundUpload>(
    context.sequelize,
    'SELECT id, person_id AS "personId" FROM raw_files WHERE id = $1 AND model_id = $2',
    [uploadId, modelId],
  );
  return upload ?? null;
}

/**
 * Answers one request of the tus protocol. The request has been authorised; the answer is a web Response.
 *
 * @throws Problem for everything that goes wrong, so that it is told as problem details like anything else
 */
export async function answerUpload(context: Context, request: Request): Promise<Response> {
  const whole = request.headers.get(wholeFileHeader);
  if (whole !== null && !/^[0-9a-f]{64}$/i.test(whole)) {
    throw invalid([
      {
        code: 'not-a-fingerprint',
        message: 'A SHA-256 is 64 hexadecimal digits.',
        where: { field: wholeFileHeader },
      },
    ]);
  }
  const { server } = receiverOf(context);
  const response = await stated.run(whole?.toLowerCase() ?? null, () => server.handleWeb(request));
  if (response.status < 400) return response;
  throw problemOfResponse(response.status, await response.text());
}

/**
 * What has arrived of an unfinished upload, with its SHA-256.
 *
 * @throws Problem 404 where it has arrived as a whole or was dropped, 409 where more of it arrives just now
 */
export async function fingerprintUpload(context: Context, uploadId: string): Promise<ArrivedPart> {
  try {
    return await receiverOf(context).store.arrived(uploadId);
  } catch (cause) {
    if (cause instanceof UploadFault) throw problemOfResponse(cause.status_code, cause.body);
    throw cause;
  }
}

/**
 * Begins an upload: checks what is stated of the file and keeps its row.
 *
 * @throws Problem 413, 415, 422 for a file that is not taken, 409 with too many unfinished ones
 */
export async function beginUpload(context: Context, model: FoundModel, person: Actor, headers: Headers): Promise<{ id: string }> {
  const size = Number(headers.get('upload-length') ?? Number.NaN);
  const fileName = nameOf(headers.get('upload-metadata'));
  const problems = [];
  if (!Number.isSafeInteger(size) || size < 0)
    problems.push({
      code: 'size-missing',
      message: 'State the size of the file (Upload-Length).',
      where: { field: 'Upload-Length' },
    });
  if (fileName === null)
    problems.push({
      code: 'name-missing',
      message: 'State the name of the file (Upload-Metadata: filename).',
      where: { field: 'Upload-Metadata' },
    });
  if (size === 0) problems.push({ code: 'no-rows', message: 'No rows: the file is empty.', where: {} });
  if (problems.length > 0) throw invalid(problems);
  if (size > fileLimits.bytes) {
    throw new Problem(
      413,
      problemCodes.tooLarge,
      `The file has ${gib(size)} GiB; at most 1 GiB can be brought in. Split it, or leave out columns that are not needed.`,
    );
  }
  refuseByName(fileName as string);
  return inTransaction(context.sequelize, async (tx) => {
    await rows(
      context.sequelize,
      `DELETE FROM raw_files WHERE model_id = $1 AND completed_at IS NULL AND seen_at < now() - make_interval(days => $2) RETURNING id`,
      [model.id, keptDays],
      tx,
    );
    const unfinished = await RawFile.count({
      where: { modelId: model.id, personId: person.id, completedAt: null },
      transaction: tx,
    });
    if (unfinished >= mostUnfinished) {
      throw conflict('too-many-uploads', `You have ${unfinished} unfinished uploads here. Finish or drop one of them first.`);
    }
    const id = randomUUID();
    await RawFile.create(
      { id, modelId: model.id, personId: person.id, fileName: fileName as string, size: String(size) },
      { transaction: tx },
    );
    return { id };
  });
}

function receiverOf(context: Context): Receiver {
  const known = receivers.get(context);
  if (known) return known;
  const opened = openReceiver(context);
  receivers.set(context, opened);
  return opened;
}

function openReceiver(context: Context): Receiver {
  const { sequelize, config } = context;
  const store = new UploadStore({
    sequelize,
    key: config.keys.rawFiles.subarray(0, 32),
    inspect: refuseByContent,
    complete: receiveSample,
  });
  const server = new Server({
    path: '/api/models',
    datastore: store,
    maxSize: fileLimits.bytes,
    allowedOrigins: [],
    relativeLocation: true,
    generateUrl: (request, { id }) => `${new URL(request.url).pathname.replace(/\/$/, '')}/${id}`,
    // The row was made by beginUpload, which hands its id over in a header of the server's own.
    namingFunction: (request) => request.headers.get('x-upload-id') ?? randomUUID(),
    getFileIdFromRequest: (_request, last) => last,
    onResponseError: (_request, error) => {
      if (error instanceof Problem)
        return {
          status_code: error.status,
          body: JSON.stringify({ code: error.code, detail: error.detail, problems: error.problems }),
        };
      if (!('status_code' in error)) context.log.error({ err: error }, 'an upload failed');
      return undefined;
    },
  });
  return { server, store };
}

/** The file is here as a whole: it becomes a sample that waits for its reading choices. Runs in the transaction of the last chunk. */
async function receiveSample(tx: Transaction, file: ArrivedFile): Promise<void> {
  const whole = stated.getStore() ?? null;
  if (whole !== null && whole !== file.sha256) {
    throw new Problem(
      422,
      'other-file',
      'What has arrived is not the file as it is now: it was changed while it was sent. No sample was made of it. Begin anew.',
    );
  }
  const sequelize = Sample.sequelize!;
  await rows(sequelize, 'SELECT id FROM models WHERE id = $1 FOR UPDATE', [file.modelId], tx);
  const [{ number }] = await rows<{ number: number }>(
    sequelize,
    'SELECT coalesce(max(number), 0)::int + 1 AS number FROM samples WHERE model_id = $1',
    [file.modelId],
    tx,
  );
  const sample = await Sample.create(
    {
      modelId: file.modelId,
      number,
      rawFileId: file.id,
      fileName: file.fileName,
      size: String(file.size),
      sha256: file.sha256,
      receivedBy: file.personId,
    },
    { transaction: tx },
  );
  await appendRecord(tx, {
    actor: await actorOf(file.personId, tx),
    action: 'sample.received',
    entity: 'sample',
    entityId: sample.id,
    modelId: file.modelId,
    after: { fileName: file.fileName, size: file.size, sha256: file.sha256 },
  });
}

function refuseByName(fileName: string): void {
  const kind = /\.(xlsx?|xlsm|ods|zip|gz|7z|pdf|parquet|docx?)$/i.exec(fileName)?.[1].toLowerCase();
  if (kind === undefined) return;
  const what = /^(xls|ods)/.test(kind)
    ? 'This is a spreadsheet file; export it as CSV.'
    : `A .${kind} file is not read here; bring in a CSV file.`;
  throw new Problem(415, problemCodes.unsupported, what);
}

/** By the first bytes, whatever the name says. `whole` = the file ends with them. */
function refuseByContent(head: Buffer, whole: boolean): void {
  const refused = sniff(head.subarray(0, 65_536)).problems.find(({ code }) =>
    ['spreadsheet', 'archive', 'pdf', 'binary'].includes(code),
  );
  if (refused) throw new Problem(415, problemCodes.unsupported, refused.message);
  if (!whole) return;
  // A byte-order mark and zero bytes of UTF-16 are no content.
  const content = head
    .toString('latin1')
    .replace(/^(\xef\xbb\xbf|\xff\xfe|\xfe\xff)/, '')
    .replaceAll('\0', '');
  if (content.trim() === '') throw invalid([{ code: 'no-rows', message: 'No rows: the file is empty.', where: {} }]);
  const header = /^\s*[^\r\n]*(\r\n|\r|\n|$)/.exec(content)?.[0] ?? '';
  const quotesClosed = (header.match(/"/g)?.length ?? 0) % 2 === 0;
  if (quotesClosed && content.slice(header.length).trim() === '') {
    throw invalid([{ code: 'no-rows', message: 'No rows: the file has a header and nothing below it.', where: { line: 1 } }]);
  }
}

function nameOf(metadata: string | null): string | null {
  try {
    const name = Metadata.parse(metadata ?? undefined).filename?.trim();
    // Only the last part of a path, without what a terminal or a header would act upon.
    const plain = name
      ?.split(/[\\/]/)
      .pop()
      ?.replace(/\p{Cc}/gu, '')
      .slice(0, 255);
    return plain ? plain : null;
  } catch {
    return null;
  }
}

function problemOfResponse(status: number, body: string): Problem {
  try {
    const told = JSON.parse(body) as { code?: string; detail?: string; problems?: Problem['problems'] };
    if (told.code && told.detail) return new Problem(status, told.code, told.detail, { problems: told.problems ?? [] });
  } catch {
    // A message of the protocol, in words.
  }
  if (status === 404 || status === 410)
    return new Problem(404, problemCodes.notFound, 'This upload is not there any more. Begin it again.');
  if (status === 409)
    return new Problem(
      409,
      problemCodes.conflict,
      'The server has another offset for this upload. Ask for it and go on from there.',
    );
  if (status >= 500)
    return new Problem(500, problemCodes.internal, 'The upload failed on our side. What has arrived is kept; go on from there.');
  return new Problem(status, problemCodes.malformed, body.trim());
}

const gib = (bytes: number): string => (bytes / 1024 ** 3).toFixed(2);
