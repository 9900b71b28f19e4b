import { type Browser, type BrowserContext, type Page, test as base, expect } from '@playwright/test';
import { signIn } from './browser';
import { type DemoPlaces, readDemoPlaces } from './demo-places';
import type { SignIn } from './installation';

/** One page of the browser that stays open, with everything that has gone wrong on it so far. */
export interface Room {
  readonly page: Page;
  /** What went wrong since the last time this was asked: errors, policy violations, requests that failed or were refused. */
  takeProblems(): string[];
}

interface WorkerFixtures {
  /** The room of one of the demo's people, by role, or of somebody who has not signed in; each signs in once. */
  readonly roomOf: (who: string) => Promise<Room>;
  /** Where the demo's things lie. */
  readonly demo: DemoPlaces;
}

/**
 * The browser test for those who look at many pages: a page for each person, signed in once and used again by every test of a worker.
 *
 * @example
 * test('lists models', async ({ roomOf }) => { const { page } = await roomOf('modeller'); await page.goto('/models'); … });
 */
export const test = base.extend<object, WorkerFixtures>({
  roomOf: [
    async ({ browser }, use) => {
      const rooms = new Map<string, Promise<{ room: Room; context: BrowserContext }>>();
      await use(async (who) => {
        const opening = rooms.get(who) ?? open(browser, who);
        rooms.set(who, opening);
        return (await opening).room;
      });
      for (const opened of rooms.values()) await (await opened).context.close();
    },
    { scope: 'worker' },
  ],
  demo: [async ({ roomOf }, use) => use(await readDemoPlaces((await roomOf('modeller')).page)), { scope: 'worker' }],
});

export { expect };

async function open(browser: Browser, who: string): Promise<{ room: Room; context: BrowserContext }> {
  const context = await browser.newContext({
    baseURL: process.env['TALLYSTONE_E2E_URL'],
    viewport: { width: 1280, height: 900 },
    colorScheme: 'light',
    reducedMotion: 'reduce',
    locale: 'en-GB',
    timezoneId: 'Europe/London',
  });
  let problems: string[] = [];
  context.on('weberror', (error) => problems.push(String(error.error())));
  context.on('console', (message) => {
    if (message.type() === 'error') problems.push(`console: ${message.text()}`);
  });
  context.on('response', (response) => {
    if (response.status() >= 400) problems.push(`${response.status()} ${response.request().method()} ${response.url()}`);
  });
  context.on('requestfailed', (request) => {
    // Aborted: the browser left the page while this was under way, as it does with the stream of events each time.
    const why = request.failure()?.errorText;
    if (why !== 'net::ERR_ABORTED') problems.push(`${why} ${request.url()}`);
  });
  // A string: these tests know no types of the browser.
  await context.addInitScript(
    `addEventListener('securitypolicyviolation', (event) => console.error('policy: ' + event.violatedDirective + ' ' + event.blockedURI));`,
  );
  const page = await context.newPage();
  if (who !== 'nobody') {
    const signIns = JSON.parse(process.env['TALLYSTONE_E2E_SIGN_INS'] ?? '[]') as SignIn[];
    await signIn(page, signIns, who);
  }
  const room: Room = {
    page,
    takeProblems: () => {
      const taken = problems;
      problems = [];
      return taken;
    },
  };
  return { room, context };
}
