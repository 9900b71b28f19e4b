import type { Request, Response } from 'express';
import passport from 'passport';
import { Strategy } from 'passport-local';
import type { Context } from '../../context';
import type { Actor } from '../../models/person';
import { signIn } from '../../services/session/sign-in';

/**
 * Sign-in by passport-local: one instance for each context, so that two applications in a process do not share one.
 */
function passportOf(context: Context): InstanceType<typeof passport.Passport> {
  const known = instances.get(context);
  if (known) return known;
  const made = new passport.Passport();
  made.use(
    new Strategy({ usernameField: 'email', passwordField: 'password', passReqToCallback: true }, (request: Request, email, password, done) => {
      signIn(context, { email, password, address: request.ip ?? 'unknown' }).then(
        (actor) => done(null, actor),
        (refused: unknown) => done(refused),
      );
    }),
  );
  made.serializeUser((user, done) => done(null, (user as Actor).id));
  instances.set(context, made);
  return made;
}
const instances = new WeakMap<Context, InstanceType<typeof passport.Passport>>();

/** Who the credentials in the body belong to. Throws what `signIn` throws. */
export function authenticate(context: Context, request: Request, response: Response): Promise<Actor> {
  return new Promise((resolve, reject) => {
    const middleware = passportOf(context).authenticate('local', (error: unknown, actor: Actor | false) => {
      if (error) reject(error);
      else if (actor) resolve(actor);
      else reject(new Error('passport found no credentials in a body that has them'));
    }) as (request: Request, response: Response, next: (error?: unknown) => void) => void;
    middleware(request, response, (error) => reject(error ?? new Error('passport went on without an answer')));
  });
}

/** Starts a session for a person under a new id; whatever session the request came with ends. */
export async function startSession(context: Context, request: Request, actor: Actor, publicId: string): Promise<void> {
  await new Promise<void>((resolve, reject) => {
    const initialize = passportOf(context).initialize() as (request: Request, response: unknown, next: (error?: unknown) => void) => void;
    initialize(request, request.res, (error) => (error ? reject(error) : resolve()));
  });
  await new Promise<void>((resolve, reject) => request.logIn(actor as Express.User, (error: unknown) => (error ? reject(error) : resolve())));
  request.session.publicId = publicId;
  request.session.address = request.ip ?? 'unknown';
  request.session.browser = request.headers['user-agent']?.slice(0, 300) ?? null;
  // Written before the answer leaves, so that the next request finds it whichever process it reaches.
  await new Promise<void>((resolve, reject) => request.session.save((error: unknown) => (error ? reject(error) : resolve())));
}

export function endSession(request: Request): Promise<void> {
  return new Promise((resolve, reject) => request.session.destroy((error: unknown) => (error ? reject(error) : resolve())));
}
