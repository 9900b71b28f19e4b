import { test as base } from '@playwright/test';
import type { SignIn } from './installation';

/**
 * The browser test with the address of the running installation and the demo's people.
 *
 * @example
 * test('signs in', async ({ page, signIns }) => { await page.goto('/sign-in'); … });
 */
export const test = base.extend<{ signIns: readonly SignIn[] }>({
  baseURL: async ({}, use) => use(process.env['TALLYSTONE_E2E_URL']), // eslint-disable-line no-empty-pattern -- Playwright reads the fixtures' names from this pattern
  signIns: async ({}, use) => use(JSON.parse(process.env['TALLYSTONE_E2E_SIGN_INS'] ?? '[]') as SignIn[]), // eslint-disable-line no-empty-pattern -- as above
});

export { expect } from '@playwright/test';
