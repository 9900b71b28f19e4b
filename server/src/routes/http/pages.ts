import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import express, { type Express } from 'express';
import type { Context } from '../../context';
import { notFound } from '../../problems/problem';
import { nonceOf, pageHeaders } from './security-headers';

/** Serves the built client: its files as they are, and index.html, with the nonce of this response, for every address of the client. */
export function servePages(app: Express, { config }: Context): void {
  app.use(pageHeaders(config));
  app.use(
    express.static(config.webFolder, {
      index: false,
      redirect: false,
      setHeaders(response, path) {
        // Names with a hash never change what they hold.
        response.setHeader('Cache-Control', /-[A-Z0-9]{8}\.\w+$/.test(path) ? 'public, max-age=31536000, immutable' : 'no-cache');
      },
    }),
  );
  app.get('/{*path}', async (request, response) => {
    // A missing file is no page of the client.
    if (/\.\w+$/.test(request.path)) throw notFound();
    const html = await readIndex(join(config.webFolder, 'index.html'));
    if (html === null) throw notFound();
    response.setHeader('Cache-Control', 'no-store');
    response.type('html').send(html.replace(/<ts-root(?=[\s>])/, `<ts-root ngCspNonce="${nonceOf(response)}"`));
  });
}

async function readIndex(path: string): Promise<string | null> {
  try {
    return await readFile(path, 'utf8');
  } catch {
    return null;
  }
}
