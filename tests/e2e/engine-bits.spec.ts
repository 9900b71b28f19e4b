import { fileURLToPath } from 'node:url';
import { expect, test } from '@playwright/test';
import { build } from 'esbuild';
import { engineBits } from '../support/engine-bits';

/** The solver in a page, bundled as the client would be. */
async function script(): Promise<string> {
  const { outputFiles } = await build({
    entryPoints: [fileURLToPath(new URL('../support/engine-bits.ts', import.meta.url))],
    tsconfig: fileURLToPath(new URL('../../tsconfig.json', import.meta.url)),
    bundle: true,
    write: false,
    format: 'iife',
    globalName: 'numbers',
  });
  return outputFiles[0].text;
}

for (const kernels of ['fastest', 'plain'] as const) {
  test(`the fast solver gives the same bits in the browser: ${kernels} kernels`, async ({ page }) => {
    const wanted = engineBits('fastest');
    expect(wanted.length).toBeGreaterThan(500);
    await page.goto('about:blank');
    await page.addScriptTag({ content: await script() });
    const found = await page.evaluate((kind) => (globalThis as unknown as { numbers: { engineBits: typeof engineBits } }).numbers.engineBits(kind), kernels);
    expect(found).toBe(wanted);
  });
}
