import { randomUUID } from 'node:crypto';
import type { AnswerOf } from '@tallystone/contracts/endpoint';
import {
  changePassword,
  endOwnSession,
  listOwnSessions,
  readSession,
  signIn,
  signOut,
} from '@tallystone/contracts/session/endpoints';
import type { Request, Response } from 'express';
import type { Context } from '../../context';
import type { Actor } from '../../models/person';
import { abilitiesOf } from '../../policies/abilities';
import { notFound } from '../../problems/problem';
import * as passwords from '../../services/session/change-password';
import * as own from '../../services/session/own-sessions';
import { recordSignOut } from '../../services/session/sign-out';
import { isHttps, issueToken } from '../http/cross-site';
import { type Route, defineRoute } from '../http/route';
import { sessionCookieName } from '../http/session-cookie';
import { authenticate, endSession, startSession } from './passport';

type SessionView = AnswerOf<typeof readSession>;

/** Also reissues the cross-site token, because it is bound to the session's id, which sign-in and sign-out change. */
function present(context: Context, request: Request, response: Response, person: Actor | null): SessionView {
  issueToken(context.config, request, response, person !== null);
  const demo = context.config.demo;
  if (!person) return { user: null, abilities: [], demo };
  const { id, name, email, roles } = person;
  return { user: { id, name, email, roles: [...roles] }, abilities: abilitiesOf(person), demo };
}

export const sessionRoutes: readonly Route[] = [
  defineRoute(readSession, {
    access: 'anyone',
    act: ({ context, request, response, person }) => present(context, request, response, person),
  }),

  defineRoute(signIn, {
    access: 'anyone',
    ownTransactions: true,
    async act({ context, request, response, body }) {
      // Passport reads the body; hand it what the schema made of it.
      request.body = body;
      const actor = await authenticate(context, request, response);
      await startSession(context, request, actor, randomUUID());
      return present(context, request, response, actor);
    },
  }),

  defineRoute(signOut, {
    access: 'signed-in',
    ownTransactions: true,
    async act({ context, request, response, person, address }) {
      await endSession(request);
      await recordSignOut(context, person, address);
      response.clearCookie(sessionCookieName(context), {
        path: '/',
        httpOnly: true,
        sameSite: 'lax',
        secure: isHttps(context.config),
      });
      return present(context, request, response, null);
    },
  }),

  defineRoute(changePassword, {
    access: 'signed-in',
    ownTransactions: true,
    async act({ context, request, response, person, body, address }) {
      await passwords.changePassword(context, person, { ...body, address });
      await startSession(context, request, person, randomUUID());
      return present(context, request, response, person);
    },
  }),

  defineRoute(listOwnSessions, {
    access: 'signed-in',
    async act({ context, request, person }) {
      const sessions = await own.listOwnSessions(context, person.id);
      return {
        sessions: sessions.map(({ id, sid, startedAt, seenAt, address, browser }) => ({
          id,
          startedAt: startedAt.toISOString(),
          seenAt: seenAt.toISOString(),
          address,
          browser,
          current: sid === request.sessionID,
        })),
      };
    },
  }),

  defineRoute(endOwnSession, {
    access: 'signed-in',
    async act({ context, tx, person, params }) {
      if (!(await own.endOwnSession(context, tx, person, params.sessionId))) throw notFound();
      return undefined;
    },
  }),
];
