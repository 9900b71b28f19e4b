import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import { BaseError, ConnectionError, DatabaseError } from 'sequelize';
import { ZodError } from 'zod';
import { Problem, conflict } from './problem';

/** SQLSTATEs and socket errors that mean: the database is away or going away, ask again soon. */
const away = /^(08|57P0|53300|ECONN|EPIPE|ETIMEDOUT|ENOTFOUND|EHOSTUNREACH)/;
const lostConnection =
  /Connection terminated|connection was closed|timeout exceeded when trying to connect|Client has encountered a connection error/i;
const raced = /^(40001|40P01|55P03)/;

const unavailable = (): Problem =>
  new Problem(
    503,
    problemCodes.unavailable,
    'The database does not answer just now. Nothing was changed; try again in a moment.',
    {
      headers: { 'Retry-After': '2' },
    },
  );

/** The one mapping from whatever was thrown to what the client is told. Null = a fault of ours: 500, details only in the log. */
export function problemFrom(error: unknown): Problem | null {
  if (error instanceof Problem) return error;
  if (error instanceof ZodError)
    return new Problem(422, problemCodes.invalid, 'The input is not valid.', { problems: problemsOf(error) });
  if (!(error instanceof Error)) return null;
  const code = codeOf(error);
  if (code === '53100') {
    return new Problem(
      507,
      problemCodes.diskFull,
      'The disk of the database is full. Nothing was changed. An administrator has to free space; then try again.',
    );
  }
  if (error instanceof ConnectionError || away.test(code) || lostConnection.test(messageOf(error))) return unavailable();
  if (raced.test(code)) {
    return new Problem(503, problemCodes.unavailable, 'Someone else changed the same thing at this moment. Try again.', {
      headers: { 'Retry-After': '1' },
    });
  }
  if (code === '23505') return conflict(problemCodes.conflict, 'This already exists.');
  return fromBodyParser(error);
}

/** Sequelize and pg both keep the SQLSTATE, at different depths. */
function codeOf(error: Error): string {
  if (error instanceof BaseError) {
    const inner =
      error instanceof DatabaseError || error instanceof ConnectionError ? error.parent : (error as { parent?: Error }).parent;
    if (inner) return codeOf(inner);
  }
  const code = (error as { code?: unknown }).code;
  return typeof code === 'string' ? code : '';
}

function messageOf(error: Error): string {
  const parent = (error as { parent?: Error }).parent;
  return parent ? `${error.message} ${parent.message}` : error.message;
}

/** What Express's body parsers and routers throw. */
function fromBodyParser(error: Error): Problem | null {
  const { type, status } = error as { type?: unknown; status?: unknown };
  if (type === 'entity.too.large') return new Problem(413, problemCodes.tooLarge, 'The request is larger than this route reads.');
  if (type === 'entity.parse.failed') return new Problem(400, problemCodes.malformed, 'The body is not JSON.');
  if (typeof status === 'number' && status >= 400 && status < 500 && (typeof type === 'string' || error instanceof URIError)) {
    return new Problem(status, problemCodes.malformed, 'The request cannot be read.');
  }
  return null;
}

/** Every issue of a schema with its place; `where.field` is the path in the body, as in `roles.1`. */
export function problemsOf(error: ZodError, part = 'body'): ProblemItem[] {
  return error.issues.flatMap((issue) =>
    issue.code === 'unrecognized_keys'
      ? issue.keys.map((key) => ({
          code: 'unknown-field',
          message: `There is no field ${key}`,
          where: { part, field: [...issue.path, key].join('.') },
        }))
      : [{ code: issue.code.replaceAll('_', '-'), message: issue.message, where: { part, field: issue.path.join('.') } }],
  );
}
