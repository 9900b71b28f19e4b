import type { Request, Response } from 'express';
import passport from 'passport';
import { Strategy } from 'passport-local';
import type { Context } from '../../context';
import type { Actor } from '../../models/person';
import { signIn } from '../../services/session/sign-in';
import { finished } from '../http/callback';

/**
 * Sign-in by passport-local: one instance for each context, so that two applications in a process do not share one.
 */
function passportOf(context: Context): InstanceType<typeof passport.Passport> {
  const known = instances.get(context);
  if (known) return known;
  const made = new passport.Passport();
  made.use(
    new Strategy(
      { usernameField: 'email', passwordField: 'password', passReqToCallback: true },
      (request: Request, email, password, done) => {
        signIn(context, { email, password, address: request.ip ?? 'unknown' }).then(
          (actor) => done(null, actor),
          (refused: unknown) => done(refused),
        );
      },
    ),
  );
  made.serializeUser((user, done) => done(null, (user as Actor).id));
  instances.set(context, made);
  return made;
}
const instances = new WeakMap<Context, InstanceType<typeof passport.Passport>>();

/** Who the credentials in the body belong to. Throws what `signIn` throws. */
export async function authenticate(context: Context, request: Request, response: Response): Promise<Actor> {
  let found: Actor | false = false;
  await finished((done) => {
    const middleware = passportOf(context).authenticate('local', (error: unknown, actor: Actor | false) => {
      found = actor;
      done(error);
    }) as Middleware;
    middleware(request, response, done);
  });
  // The body was held against its schema before, so that both credentials are there.
  if (!found) throw new Error('passport found no credentials in a body that has them');
  return found;
}

type Middleware = (request: Request, response: Response | undefined, next: (error?: unknown) => void) => void;

/** Starts a session for a person under a new id; whatever session the request came with ends. */
export async function startSession(context: Context, request: Request, actor: Actor, publicId: string): Promise<void> {
  await finished((done) => (passportOf(context).initialize() as Middleware)(request, request.res, done));
  await finished((done) => request.logIn(actor, done));
  request.session.publicId = publicId;
  request.session.address = request.ip ?? 'unknown';
  request.session.browser = request.headers['user-agent']?.slice(0, 300) ?? null;
  // Written before the answer leaves, so that the next request finds it whichever process it reaches.
  await finished((done) => request.session.save(done));
}

export const endSession = (request: Request): Promise<void> => finished((done) => request.session.destroy(done));
