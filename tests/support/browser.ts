import { type Locator, type Page, test as base, expect } from '@playwright/test';
import type { SignIn } from './installation';

interface Fixtures {
  /** How the demo's people sign in. */
  readonly signIns: readonly SignIn[];
  /** Signs a person of the demo in, by role. */
  readonly signInAs: (role: string) => Promise<void>;
  /** What a page must never do, whatever a test looks at: break the content security policy, or throw. */
  readonly cleanPages: undefined;
}

/**
 * The browser test with the address of the running installation and the demo's people. After each test it holds every page that was opened
 * to having thrown nothing and violated no content security policy.
 *
 * @example
 * test('lists models', async ({ page, signInAs }) => { await signInAs('modeller'); await page.goto('/models'); … });
 */
export const test = base.extend<Fixtures>({
  // eslint-disable-next-line no-empty-pattern -- Playwright reads the names of the fixtures needed from this pattern
  baseURL: async ({}, use) => use(process.env['TALLYSTONE_E2E_URL']),
  // eslint-disable-next-line no-empty-pattern -- as above
  signIns: async ({}, use) => use(JSON.parse(process.env['TALLYSTONE_E2E_SIGN_INS'] ?? '[]') as SignIn[]),
  signInAs: async ({ page, signIns }, use) => {
    await use((role) => signIn(page, signIns, role));
  },
  cleanPages: [
    async ({ context }, use) => {
      const problems: string[] = [];
      context.on('weberror', (webError) => problems.push(String(webError.error())));
      // Angular keeps uncaught errors from the browser and hands them to the application's handler, which writes them to the console. An answer
      // with an error status is no fault of the page: tests ask for those.
      context.on('console', (message) => {
        if (message.type() === 'error' && !message.text().startsWith('Failed to load resource')) problems.push(message.text());
      });
      await use(undefined);
      expect(problems, 'errors and policy violations of the pages').toEqual([]);
    },
    { auto: true },
  ],
});

export { expect };

/** Signs a person of the demo in on a page, by role. */
export async function signIn(page: Page, signIns: readonly SignIn[], role: string): Promise<void> {
  const person = signIns.find((known) => known.role === role);
  if (!person) throw new Error(`The demo has no ${role}.`);
  await page.goto('/sign-in');
  await page.getByLabel('E-mail address').fill(person.email);
  await page.getByLabel('Password', { exact: true }).fill(person.password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page).not.toHaveURL(/sign-in/, { timeout: 30_000 });
}

/** Chooses an entry of a list that opens. */
export async function pick(within: Page | Locator, page: Page, label: string | RegExp, option: string | RegExp): Promise<void> {
  await within.getByRole('combobox', { name: label }).click();
  await page.getByRole('option', { name: option, exact: typeof option === 'string' }).click();
}
