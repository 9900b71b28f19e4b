import { expect, test } from '@playwright/test';
import { fitInvented, type InventedFit } from '../support/invented-fit';
import { startNumericPage } from '../support/numeric-page';

/** The numeric library in a browser: 30,000 applicants by 25 characteristics fitted in the page give the server's coefficients. */
const order = { rows: 30_000, columns: 25, seed: 7 };

let site: { url: string; stop: () => Promise<void> };
test.beforeAll(async () => {
  site = await startNumericPage();
});
test.afterAll(() => site.stop());

test('fits in a web worker what the server fits, to 1e-12', async ({ page }) => {
  const faults: string[] = [];
  page.on('console', (message) => message.type() === 'error' && faults.push(message.text()));
  page.on('pageerror', (error) => faults.push(error.message));
  await page.goto(site.url);
  const there = await page.evaluate<InventedFit>(`window.fit(${JSON.stringify(order)})`);
  const here = fitInvented(order);
  expect(faults).toEqual([]);
  expect(there.solver).toBe('engine, engine');
  expect(here.solver).toBe('engine, engine');
  expect(there.lambdas.length).toBeGreaterThan(30);
  expect(there.largestResidual).toBeLessThanOrEqual(1e-9);
  let farthest = 0;
  for (const [k, intercept] of here.intercepts.entries()) {
    farthest = Math.max(farthest, Math.abs(there.intercepts[k] - intercept), Math.abs(there.lambdas[k] - here.lambdas[k]));
    for (const [j, coefficient] of here.coefficients[k].entries())
      farthest = Math.max(farthest, Math.abs(there.coefficients[k][j] - coefficient));
  }
  expect(farthest).toBeLessThanOrEqual(1e-12);
  expect([there.minimum, there.oneStandardError]).toEqual([here.minimum, here.oneStandardError]);
  // Folds stop at a residual of 1e-6, and the last digit of an exponential is each JavaScript engine's own.
  for (const [k, mean] of here.means.entries()) expect(Math.abs(there.means[k] - mean)).toBeLessThanOrEqual(1e-9);
});
