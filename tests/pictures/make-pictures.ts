import { mkdirSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { type Browser, chromium } from '@playwright/test';
import config from '../../playwright.config';
import { signIn } from '../support/browser';
import { readDemoPlaces } from '../support/demo-places';
import { type Installation, install } from '../support/installation';
import { expectLoaded, wide } from '../support/page-inspection';

/**
 * `npm run pictures`: makes the pictures of the documentation anew, in docs/pictures, from an installation of its own with the demo. What they
 * show is the demo's and carries no date, so that they change only when the product does.
 */
const folder = fileURLToPath(new URL('../../docs/pictures/', import.meta.url));
const largest = 400_000;

async function fit(browser: Browser, { url, signIns }: Installation): Promise<string> {
  const page = await browser.newPage({ baseURL: url, viewport: wide, colorScheme: 'light', locale: 'en-GB' });
  await signIn(page, signIns, 'modeller');
  const { modelId, modelName, fits } = await readDemoPlaces(page);
  const heading = 'Lasso, ten folds';
  await page.goto(`/models/${modelId}/fit/${fits[heading]}`);
  const figure = page.locator('ts-path-figure');
  await expectLoaded(page, { heading, model: modelName, loaded: figure.getByRole('slider', { name: 'Penalty' }) });
  // Down to the penalty axis that the three parts share, and to the end of the row that stands beside it.
  const { y, height } = (await figure.boundingBox())!;
  const rows = await Promise.all((await page.locator('ts-at-penalty .characteristics tr').all()).map((row) => row.boundingBox()));
  const ends = rows.map((row) => row!.y + row!.height);
  const end = Math.ceil(Math.min(...ends.filter((at) => at >= y + height)));
  const path = join(folder, 'fit.png');
  await page.screenshot({ path, fullPage: true, clip: { x: 0, y: 0, width: wide.width, height: end + 1 } });
  await page.close();
  return path;
}

mkdirSync(folder, { recursive: true });
const installation = await install({ demo: true });
const browser = await chromium.launch(config.use?.launchOptions);
try {
  for (const path of [await fit(browser, installation)]) {
    const { size } = statSync(path);
    console.log(`${path}: ${Math.round(size / 1000)} kB`);
    if (size > largest) throw new Error(`${path} is larger than ${largest / 1000} kB`);
  }
} finally {
  await browser.close();
  await installation.stop();
}
