import type { AnswerOf, BodyOf, Endpoint, ParamsOf, QueryOf } from '@tallystone/contracts/endpoint';
import type { Request, Response } from 'express';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import type { Actor } from '../../models/person';
import type { Decision } from '../../policies/decision';

/** Who may reach a route at all; what they may do there is for the policy. */
export type Access = 'anyone' | 'signed-in';

type PersonOf<A extends Access> = A extends 'signed-in' ? Actor : Actor | null;
/** Changes run in a transaction; a read has none. */
type TransactionOf<E extends Endpoint> = E['method'] extends 'GET' | 'HEAD' ? null : Transaction;

/** What the steps of a recipe see. */
export interface Call<E extends Endpoint, A extends Access, Subject = undefined> {
  readonly context: Context;
  readonly person: PersonOf<A>;
  readonly params: ParamsOf<E>;
  readonly query: QueryOf<E>;
  readonly body: BodyOf<E>;
  readonly tx: TransactionOf<E>;
  /** What `find` found. */
  readonly subject: Subject;
  readonly request: Request;
  readonly response: Response;
  readonly requestId: string;
  /** Remote address, as far as proxies that are trusted tell it. */
  readonly address: string;
  /** Throws 428 without If-Match and 412 when it does not name this revision. To be called in `act` by whoever changes what people edit. */
  match(revision: number | string): void;
  /** Sets the entity tag of the answer. */
  tag(revision: number | string): void;
}

/**
 * The recipe of one route, in the order in which its steps run: limit, authenticate, admit, validate, transaction, find, authorise, permit,
 * act, present. What is not needed is left out. An input that is not valid is refused after `authorise`: whoever may not see a thing learns
 * nothing from how it is refused, which is why neither `find` nor `authorise` is given query or body.
 */
export interface Recipe<E extends Endpoint, A extends Access, Subject> {
  readonly access: A;
  /** Refuses by person alone, before anything of the request is read. */
  readonly admit?: (person: PersonOf<A>) => Decision;
  /** Loads what the request is about. Null is answered with 404, the same as what one may not see. */
  readonly find?: (call: Omit<Call<E, A>, 'query' | 'body'>) => Promise<Subject | null> | Subject | null;
  readonly authorise?: (call: Omit<Call<E, A, Subject>, 'query' | 'body'>) => Decision | Promise<Decision>;
  /** Decides what hangs on the input itself (which act is asked for, say): runs once the input is known to be valid. */
  readonly permit?: (call: Call<E, A, Subject>) => Decision | Promise<Decision>;
  /** Does the work and answers with what the endpoint promises. */
  readonly act: (call: Call<E, A, Subject>) => Promise<AnswerOf<E>> | AnswerOf<E>;
  /** Runs after the transaction has been committed: for what cannot be rolled back. */
  readonly afterwards?: (call: Call<E, A, Subject>) => Promise<void> | void;
  /** Takes an Idempotency-Key: the same request sent again gets the same answer and does nothing. */
  readonly idempotent?: boolean;
  /** The service opens transactions of its own, because something has to stay written even when the answer is a refusal. */
  readonly ownTransactions?: boolean;
  /** No transaction around the steps and no presenting: `act` reads or writes the stream itself (uploads, downloads, events). */
  readonly streams?: boolean;
  /** Bytes of JSON that are read; 256 kB when absent. */
  readonly largestBody?: number;
}

/** A route ready to be mounted, and a row of the table that tests hold against the real Express routes. */
export interface Route {
  readonly endpoint: Endpoint;
  readonly access: Access;
  readonly recipe: Recipe<Endpoint, Access, unknown>;
}

/**
 * Ties an endpoint of the contracts to its recipe.
 *
 * @example
 * defineRoute(readPerson, {
 *   access: 'signed-in',
 *   find: ({ context, params }) => findPerson(context.sequelize, params.personId),
 *   authorise: ({ person }) => mayReadPeople(person),
 *   act: ({ subject, person, tag }) => (tag(subject.revision), presentPerson(subject, person)),
 * });
 */
export function defineRoute<const E extends Endpoint, const A extends Access, Subject = undefined>(
  endpoint: E,
  recipe: Recipe<E, A, Subject>,
): Route {
  // The steps are typed by their own endpoint; the mount only hands each recipe the calls made for it.
  return { endpoint, access: recipe.access, recipe: recipe as unknown as Recipe<Endpoint, Access, unknown> };
}
