import { createHash } from 'node:crypto';
import type { Endpoint } from '@tallystone/contracts/endpoint';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import canonicalize from 'canonicalize';
import type { Request, Response } from 'express';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import type { Actor } from '../../models/person';
import { Problem } from '../../problems/problem';

interface Asked {
  readonly person: Actor;
  readonly request: Request;
  readonly endpoint: Endpoint;
  readonly body: unknown;
}

const keyShape = /^[\x21-\x7e]{8,200}$/;
/** Sends of the same key within this process, one after the other: each waiting one would otherwise hold a connection of the pool. */
const turns = new Map<string, Promise<unknown>>();

/**
 * Does the steps once for each Idempotency-Key of a person on a route. The key's row is made first, in the steps' own transaction: of many
 * sends at once, one makes it and works, the others wait for its commit and repeat its answer. Without the header the steps just run.
 *
 * @throws Problem 422 when the key was used with another body
 */
export async function once(
  context: Context,
  asked: Asked,
  response: Response,
  steps: (tx: Transaction) => Promise<unknown>,
): Promise<unknown> {
  const key = asked.request.headers['idempotency-key'];
  if (key === undefined) return inTransaction(context.sequelize, steps);
  if (typeof key !== 'string' || !keyShape.test(key)) {
    throw new Problem(400, problemCodes.malformed, 'An Idempotency-Key has 8 to 200 visible characters.');
  }
  const route = `${asked.endpoint.method} ${asked.request.path}`;
  const bodyHash = createHash('sha256')
    .update(canonicalize({ body: asked.body ?? null, query: asked.request.query }) ?? '')
    .digest('hex');

  const work = (): Promise<unknown> =>
    inTransaction(context.sequelize, async (tx) => {
      const made = await rows(
        context.sequelize,
        'INSERT INTO idempotency_keys (person_id, route, key, body_hash) VALUES ($1, $2, $3, $4) ON CONFLICT DO NOTHING RETURNING key',
        [asked.person.id, route, key, bodyHash],
        tx,
      );
      if (made.length === 0) {
        const [earlier] = await rows<{ body_hash: string; answer: unknown }>(
          context.sequelize,
          'SELECT body_hash, answer FROM idempotency_keys WHERE person_id = $1 AND route = $2 AND key = $3',
          [asked.person.id, route, key],
          tx,
        );
        if (earlier.body_hash !== bodyHash) {
          throw new Problem(422, problemCodes.keyReused, 'This Idempotency-Key was used for another request. Use a new one.');
        }
        response.setHeader('Idempotent-Replayed', 'true');
        return earlier.answer;
      }
      const answer = await steps(tx);
      await rows(
        context.sequelize,
        'UPDATE idempotency_keys SET answer = $4 WHERE person_id = $1 AND route = $2 AND key = $3 RETURNING key',
        [asked.person.id, route, key, JSON.stringify(answer ?? null)],
        tx,
      );
      return answer;
    });

  const turn = `${asked.person.id} ${route} ${key}`;
  const mine = (turns.get(turn) ?? Promise.resolve()).then(work, work);
  turns.set(turn, mine);
  try {
    return await mine;
  } finally {
    if (turns.get(turn) === mine) turns.delete(turn);
  }
}
