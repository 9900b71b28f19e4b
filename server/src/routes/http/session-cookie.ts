import connectPgSimple from 'connect-pg-simple';
import type { RequestHandler } from 'express';
import session from 'express-session';
import { deriveKey } from '../../config/keys';
import type { Context } from '../../context';
import { idleSeconds } from '../../services/session/read-signed-in';
import { isHttps } from './cross-site';

declare module 'express-session' {
  interface SessionData {
    /** Set by passport at sign-in. */
    passport: { user: string };
    /** How the session is called where people see it; its real id is a secret. */
    publicId: string;
    address: string;
    browser: string | null;
  }
}

/**
 * Sessions in PostgreSQL. The cookie ends with the browser; idle and total time are held by the database (read-signed-in.ts). Nothing is
 * stored for a visitor who is not signed in.
 */
export function sessionCookie(context: Context): RequestHandler {
  const Store = connectPgSimple(session);
  return session({
    store: new Store({
      pool: context.pool,
      tableName: 'session',
      ttl: idleSeconds,
      pruneSessionInterval: 900,
      errorLog: (...args) => context.log.warn({ args }, 'session store'),
    }),
    name: sessionCookieName(context),
    secret: deriveKey(context.config.keys.session, 'session').toString('base64'),
    resave: false,
    saveUninitialized: false,
    proxy: context.config.origin !== null,
    cookie: { path: '/', httpOnly: true, sameSite: 'lax', secure: isHttps(context.config) },
  });
}

export const sessionCookieName = (context: Context): string => (isHttps(context.config) ? '__Host-tallystone' : 'tallystone');
