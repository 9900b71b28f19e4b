import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import { type Locator, type Page, expect } from '@playwright/test';
import axe, { type Result } from 'axe-core';

export const wide = { width: 1280, height: 900 };
export const narrow = { width: 390, height: 844 };
export type Scheme = 'light' | 'dark';

/** What a page shows once it is there: checked before anything else of it. */
export interface Expected {
  /** Words of the page's own heading: the h1, or the h2 below the name of a model. */
  readonly heading: string | RegExp;
  readonly model: string | null;
  /** Something that is on the page only once its data are. */
  readonly loaded: Locator;
}

/** Waits until the page has its heading, its data and no sign of work under way. */
export async function expectLoaded(page: Page, { heading, model, loaded }: Expected): Promise<void> {
  await expect(loaded.first()).toBeVisible();
  await expect(page.getByRole('heading', { level: 1 })).toHaveText(model ?? heading);
  if (model !== null) await expect(page.locator('h2[data-page-heading]')).toHaveText(heading);
  await expect(page.locator('[role=progressbar], [aria-busy=true], p[role=status].ts-second')).toHaveCount(0);
}

/**
 * Opens an address. Where the client is open already this is as its own links do it, and the client is not loaded anew: most of the time of
 * a visit went into that. The first page of a room, and the same address once more, are loaded as from the address bar.
 */
export async function openAddress(page: Page, address: string): Promise<void> {
  const from = page.url();
  if (!from.startsWith('http') || new URL(address, from).pathname === new URL(from).pathname)
    return void (await page.goto(address));
  await page.evaluate(`history.pushState(null, '', ${JSON.stringify(address)}); dispatchEvent(new PopStateEvent('popstate'));`);
}

/** Sets the width and the scheme of the page that is open and waits until figures have been drawn anew. */
export async function present(page: Page, size: typeof wide, scheme: Scheme): Promise<void> {
  await page.setViewportSize(size);
  await page.emulateMedia({ colorScheme: scheme });
  await page.evaluate('new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(() => done())))');
}

const levels = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22a', 'wcag22aa'];
/** Rules that look at colours; what the others look at is the same in light and dark. */
const colours = ['color-contrast', 'link-in-text-block'];

/** WCAG 2.2 level A and AA, as far as axe can tell: all of it, what a scheme alone can change, or all but that. */
export async function expectAccessible(page: Page, part: 'all' | 'colours' | 'layout', where: string): Promise<void> {
  const known = await page.evaluate(`typeof axe !== 'undefined'`);
  // Once for as long as the page is open: half a megabyte takes longer to hand over than most of its rules take to run.
  if (!known) await page.evaluate(axe.source);
  const runOnly = part === 'colours' ? { type: 'rule', values: colours } : { type: 'tag', values: levels };
  const rules = part === 'layout' ? Object.fromEntries(colours.map((rule) => [rule, { enabled: false }])) : {};
  const options = JSON.stringify({ runOnly, rules, resultTypes: ['violations'], preload: false, iframes: false });
  const violations = await page.evaluate<Result[]>(`axe.run(document, ${options}).then(({ violations }) => violations)`);
  const found = violations.flatMap(({ id, nodes }) =>
    nodes.map(({ target, failureSummary }) => `${id} at ${target.join(' ')}: ${failureSummary?.replaceAll(/\s+/g, ' ')}`),
  );
  expect.soft(found, `axe, ${where}`).toEqual([]);
}

/** The document is as wide as the window: what is wider scrolls inside its own region. */
export async function expectNoOverflow(page: Page, where: string): Promise<void> {
  const widths = await page.evaluate('[document.documentElement.scrollWidth, document.documentElement.clientWidth]');
  const [content, window] = widths as [number, number];
  expect.soft(content, `width of the document, ${where}`).toBeLessThanOrEqual(window);
}

/** Keeps a picture of the whole page under the folder of results, where people can look at all of them. */
export async function keepPicture(page: Page, folder: string, name: string): Promise<void> {
  mkdirSync(folder, { recursive: true });
  await page.screenshot({ path: join(folder, `${name}.png`), fullPage: true, animations: 'disabled' });
}
