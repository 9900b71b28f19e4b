import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';

/**
 * A page of its own that fits in a web worker with the numeric library as it is: nothing of Node.js can be in the bundle, or building it fails. The
 * page's policy allows WebAssembly and nothing else beyond its own files.
 */
export async function startNumericPage(): Promise<{ url: string; stop: () => Promise<void> }> {
  const bundled = await build({
    entryPoints: [fileURLToPath(new URL('./numeric-page-worker.ts', import.meta.url))],
    bundle: true,
    write: false,
    format: 'iife',
    platform: 'browser',
    target: 'es2022',
    alias: { '@tallystone/numeric': fileURLToPath(new URL('../../libs/numeric', import.meta.url)) },
  });
  const files = new Map([
    [
      '/',
      {
        type: 'text/html; charset=utf-8',
        body: '<!doctype html><html lang="en"><title>Fit in a page</title><script src="page.js"></script></html>',
      },
    ],
    [
      '/page.js',
      {
        type: 'text/javascript',
        body: `window.fit = (order) => new Promise((resolve, reject) => {
          const worker = new Worker('worker.js');
          worker.onmessage = ({ data }) => { worker.terminate(); resolve(data); };
          worker.onerror = ({ message }) => reject(new Error(message));
          worker.postMessage(order);
        });`,
      },
    ],
    ['/worker.js', { type: 'text/javascript', body: bundled.outputFiles[0].text }],
  ]);
  const server = createServer((request, response) => {
    const file = files.get(request.url ?? '');
    response.writeHead(file ? 200 : 404, {
      'Content-Type': file?.type ?? 'text/plain',
      'Content-Security-Policy': "default-src 'none'; script-src 'self' 'wasm-unsafe-eval'; worker-src 'self'",
    });
    response.end(file?.body);
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  return { url: `http://127.0.0.1:${port}/`, stop: () => new Promise((resolve) => server.close(() => resolve())) };
}
