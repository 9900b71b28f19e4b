import { randomBytes } from 'node:crypto';
import type { RequestHandler, Response } from 'express';
import helmet from 'helmet';
import type { Config } from '../../config/environment';
import { isHttps } from './cross-site';

/** Headers for everything that is not a page: nothing may be loaded, framed or sniffed, nothing is cached. */
export function apiHeaders(config: Config): RequestHandler[] {
  return [
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: { defaultSrc: ["'none'"], frameAncestors: ["'none'"], baseUri: ["'none'"] },
      },
      ...others(config),
    }),
    (_request, response, next) => {
      response.setHeader('Cache-Control', 'no-store');
      next();
    },
  ];
}

/** Headers for pages. A nonce for each response lets Angular's own style elements in, and no other inline style or script. */
export function pageHeaders(config: Config): RequestHandler[] {
  return [
    (_request, response, next) => {
      response.locals['nonce'] = randomBytes(18).toString('base64');
      next();
    },
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'none'"],
          scriptSrc: ["'self'"],
          styleSrc: ["'self'", (_request, response) => `'nonce-${nonceOf(response as Response)}'`],
          styleSrcAttr: ["'none'"],
          imgSrc: ["'self'", 'data:', 'blob:'],
          fontSrc: ["'self'"],
          connectSrc: ["'self'"],
          workerSrc: ["'self'"],
          manifestSrc: ["'self'"],
          baseUri: ["'none'"],
          formAction: ["'self'"],
          frameAncestors: ["'none'"],
          requireTrustedTypesFor: ["'script'"],
          trustedTypes: ['angular', 'angular#bundler', 'angular#components', 'angular#unsafe-bypass', "'allow-duplicates'"],
        },
      },
      ...others(config),
    }),
  ];
}

/** Headers for the page of the API, whose package sets styles on elements. */
export function apiPageHeaders(config: Config): RequestHandler {
  return helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: ["'none'"],
        scriptSrc: ["'self'"],
        styleSrc: ["'self'", "'unsafe-inline'"],
        imgSrc: ["'self'", 'data:'],
        connectSrc: ["'self'"],
        baseUri: ["'none'"],
        formAction: ["'none'"],
        frameAncestors: ["'none'"],
      },
    },
    ...others(config),
  });
}

export const nonceOf = (response: Response): string => String(response.locals['nonce']);

function others(config: Config) {
  return {
    strictTransportSecurity: isHttps(config) ? { maxAge: 31_536_000, includeSubDomains: false } : false,
    referrerPolicy: { policy: 'no-referrer' as const },
    xFrameOptions: { action: 'deny' as const },
    crossOriginOpenerPolicy: { policy: 'same-origin' as const },
    crossOriginResourcePolicy: { policy: 'same-origin' as const },
    // Left to pages that share memory.
    crossOriginEmbedderPolicy: false,
  } as const;
}
