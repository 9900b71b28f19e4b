import { createHmac, randomBytes, timingSafeEqual } from 'node:crypto';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { Request, Response } from 'express';
import type { Config } from '../../config/environment';
import { deriveKey } from '../../config/keys';
import { Problem } from '../../problems/problem';

/** Names of Angular's convention: the client copies the cookie into the header. */
export const tokenCookie = 'XSRF-TOKEN';
export const tokenHeader = 'x-xsrf-token';

const loopback = /^(localhost|127\.0\.0\.1|\[::1\])(:\d+)?$/i;

/**
 * A token that proves the page was served by us for this session: a nonce and its HMAC with the session's id. Signed out, there is no
 * session to bind to and it is bound to nobody; then Origin and the equality of cookie and header carry the weight.
 */
export function issueToken(config: Config, request: Request, response: Response, signedIn: boolean): void {
  const session = signedIn ? request.sessionID : '';
  // One that still fits is kept: another page of this browser may be about to send it.
  if (fits(config, session, cookieOf(request, tokenCookie) ?? '')) return;
  const nonce = randomBytes(16).toString('base64url');
  response.cookie(tokenCookie, `${nonce}.${sealOf(config, session, nonce)}`, {
    path: '/',
    sameSite: 'lax',
    secure: isHttps(config),
    // The client has to read it.
    httpOnly: false,
  });
}

/**
 * Refuses a change that another site could have sent on a person's behalf.
 *
 * @throws Problem 403 `cross-site`
 */
export function checkCrossSite(config: Config, request: Request, signedIn: boolean): void {
  const site = request.headers['sec-fetch-site'];
  if (site !== undefined && site !== 'same-origin' && site !== 'none') throw crossSite();
  const origin = request.headers.origin;
  if (origin !== undefined && !isOwnOrigin(config, origin, request.headers.host ?? '')) throw crossSite();
  const header = request.headers[tokenHeader];
  const cookie = cookieOf(request, tokenCookie);
  if (typeof header !== 'string' || cookie === null || header !== cookie) throw crossSite();
  if (!fits(config, signedIn ? request.sessionID : '', header)) throw crossSite();
}

function fits(config: Config, session: string, token: string): boolean {
  const [nonce, seal] = token.split('.');
  const expected = Buffer.from(sealOf(config, session, nonce));
  return seal !== undefined && Buffer.byteLength(seal) === expected.length && timingSafeEqual(Buffer.from(seal), expected);
}

export const isHttps = (config: Config): boolean => config.origin?.startsWith('https:') ?? false;

/** With no origin configured the server is for loopback only, under whatever port the address bar shows. */
function isOwnOrigin(config: Config, origin: string, host: string): boolean {
  return config.origin !== null ? origin === config.origin : loopback.test(host) && origin === `http://${host}`;
}

function sealOf(config: Config, session: string, nonce: string): string {
  return createHmac('sha256', deriveKey(config.keys.session, 'cross-site')).update(`${session}:${nonce}`).digest('base64url');
}

function cookieOf(request: Request, name: string): string | null {
  for (const part of (request.headers.cookie ?? '').split(';')) {
    const [key, ...rest] = part.trim().split('=');
    if (key === name) return decodeURIComponent(rest.join('='));
  }
  return null;
}

const crossSite = (): Problem =>
  new Problem(
    403,
    problemCodes.crossSite,
    'The request does not come from a page of this session. Load the page again and try once more.',
  );
