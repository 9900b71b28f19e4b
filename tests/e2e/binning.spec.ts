import type { CharacteristicDetail, BinningHistory } from '@tallystone/contracts/binnings/schema';
import type { MemberCandidates } from '@tallystone/contracts/models/schema';
import { readBench } from '@tallystone/numeric/bench';
import type { Browser, Locator, Page } from '@playwright/test';
import { expect, signIn, test } from '../support/browser';
import { type DemoPlaces, inviteByMail, post, readDemoPlaces } from '../support/demo-places';
import type { SignIn } from '../support/installation';

/**
 * The bench in the browser, on characteristics of the demo that nothing else looks at: a cut that is dragged, the same by keys, undo and redo, and two
 * people who edit at once. Each test leaves the bins as they were classed.
 */
test.describe.configure({ mode: 'serial', timeout: 120_000 });
test.use({ actionTimeout: 20_000 });

/** The bench of one characteristic as it is on a page. */
class BenchOnPage {
  readonly edits: Locator;
  readonly bins: Locator;

  constructor(
    readonly page: Page,
    private readonly demo: DemoPlaces,
    private readonly column: string,
  ) {
    this.edits = page.getByRole('region', { name: 'Edits by hand' });
    this.bins = page.getByRole('table', { name: /^Bins,\s+Development$/ });
  }

  async open(): Promise<void> {
    await this.page.goto(`/models/${this.demo.modelId}/binning/${this.demo.binningId}/${this.id}?axis=rows`);
    await expect(this.edits).toContainText('as they were classed automatically');
    await expect(this.cut(1)).toBeVisible();
  }

  get id(): string {
    return this.demo.characteristics[this.column];
  }

  /** A notch, counted from 1. */
  cut = (number: number): Locator => this.page.getByRole('slider', { name: new RegExp(`^Cut ${number} of`) });
  cuts = (): Locator => this.page.getByRole('slider', { name: /^Cut \d+ of/ });
  valueOf = async (cut: Locator): Promise<number> => Number(await cut.getAttribute('aria-valuenow'));
  row = async (name: string): Promise<string[]> =>
    this.bins
      .getByRole('row')
      .filter({ has: this.page.getByRole('rowheader', { name, exact: true }) })
      .getByRole('cell')
      .allInnerTexts();
  saved = async (): Promise<void> => expect(this.page.getByText(/^Saved /)).toBeVisible();

  async stored(): Promise<CharacteristicDetail> {
    const answer = await this.page.request.get(`/api/binnings/${this.demo.binningId}/characteristics/${this.id}`);
    return (await answer.json()) as CharacteristicDetail;
  }

  /** As they were classed, and saved so. */
  async reset(): Promise<void> {
    await this.page.getByRole('button', { name: 'Reset to automatic' }).click();
    await expect.poll(async () => (await this.stored()).edits).toBe(0);
  }
}

const two = (value: number | null): string =>
  (value ?? 0)
    .toFixed(2)
    .replace('-', '\u2212')
    .replace(/^\u2212(0\.00)$/, '$1');

test('a cut is dragged: counts and WOE follow at once, and are what the server saves', async ({ page, signInAs }) => {
  await signInAs('modeller');
  const bench = new BenchOnPage(page, await readDemoPlaces(page), 'oldest_line_months');
  await bench.open();
  const cut = bench.cut(3);
  const before = { value: await bench.valueOf(cut), woe: await bench.row('WOE'), share: await bench.row('Share') };

  const box = (await cut.locator('.vee').boundingBox())!;
  const [x, y] = [box.x + box.width / 2, box.y + 4];
  await page.mouse.move(x, y);
  await page.mouse.down();
  await page.mouse.move(x + 45, y, { steps: 6 });
  // Still held: everything has followed, and nothing is an edit yet.
  await expect.poll(() => bench.valueOf(cut)).toBeGreaterThan(before.value);
  expect(await bench.row('WOE')).not.toEqual(before.woe);
  expect(await bench.row('Share')).not.toEqual(before.share);
  await expect(bench.edits).toContainText('as they were classed automatically');
  await page.mouse.up();

  const value = await bench.valueOf(cut);
  await expect(bench.edits).toContainText(`Cut moved from ${before.value} to ${value}`);
  await bench.saved();
  const stored = await bench.stored();
  expect(stored.current).toMatchObject({ kind: 'numeric' });
  expect(stored.current.kind === 'numeric' && stored.current.edges[2]).toBe(value);
  const reading = readBench(stored.fine, stored.current);
  expect((await bench.row('WOE')).filter((cell) => /\d/.test(cell))).toEqual(
    reading.bins
      .filter(({ figures }) => (figures.development?.rows ?? 0) > 0)
      .map(({ figures }) => two(figures.development?.woe ?? null)),
  );
  expect(stored.informationValue).toBe(reading.informationValue);
  await bench.reset();
  expect(await bench.row('WOE')).toEqual(before.woe);
});

test('the same by keys: moved, taken out, typed; undone and redone', async ({ page, signInAs }) => {
  await signInAs('modeller');
  const bench = new BenchOnPage(page, await readDemoPlaces(page), 'oldest_line_months');
  await bench.open();
  const [cut, count] = [bench.cut(2), await bench.cuts().count()];
  const start = await bench.valueOf(cut);
  const woe = await bench.row('WOE');

  await cut.focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => bench.valueOf(cut)).toBeGreaterThan(start);
  const moved = await bench.valueOf(cut);
  expect(await bench.row('WOE')).not.toEqual(woe);
  await page.keyboard.press('Delete');
  await expect(bench.cuts()).toHaveCount(count - 1);

  await page.keyboard.press('Control+z');
  await expect(bench.cuts()).toHaveCount(count);
  expect(await bench.valueOf(cut)).toBe(moved);
  await page.keyboard.press('Control+z');
  await expect.poll(() => bench.valueOf(cut)).toBe(start);
  expect(await bench.row('WOE')).toEqual(woe);
  await page.getByRole('button', { name: 'Redo' }).click();
  await expect.poll(() => bench.valueOf(cut)).toBe(moved);
  await page.keyboard.press('Control+Shift+z');
  await expect(bench.cuts()).toHaveCount(count - 1);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect(bench.cuts()).toHaveCount(count);

  // A value inside a fine class: the class is split there, from the stored column.
  await cut.focus();
  await page.keyboard.press('Enter');
  const field = page.getByRole('spinbutton', { name: 'Selected cut at' });
  await expect(field).toBeFocused();
  await field.fill(String(moved + 0.5));
  await page.keyboard.press('Enter');
  await expect.poll(() => bench.valueOf(cut)).toBe(moved + 0.5);
  await bench.saved();
  await expect.poll(async () => (await bench.stored()).current).toMatchObject({ edges: expect.arrayContaining([moved + 0.5]) });

  // A bin is merged with the next and split again; the letter a leads to the field for a new cut.
  const head = bench.bins.getByRole('columnheader').getByRole('button').first();
  await head.focus();
  await page.keyboard.press('m');
  await expect(bench.cuts()).toHaveCount(count - 1);
  await head.focus();
  await page.keyboard.press('s');
  await expect(bench.cuts()).toHaveCount(count);
  await expect(bench.edits).toContainText(/Split .* at /);
  await page.keyboard.press('a');
  await expect(page.getByRole('spinbutton', { name: 'New cut at' })).toBeFocused();
  await bench.reset();
});

test('somebody else saves first: theirs or mine, and nothing is lost', async ({ page, browser, signIns, baseURL }) => {
  await signIn(page, signIns, 'modeller');
  const demo = await readDemoPlaces(page);
  const other = await secondModeller(browser, page, signIns, demo, baseURL!);
  const mine = new BenchOnPage(page, demo, 'months_at_address');
  const theirs = new BenchOnPage(other, demo, 'months_at_address');
  await Promise.all([mine.open(), theirs.open()]);

  // They move one cut and it is saved; mine was read before that.
  await theirs.cut(1).focus();
  await other.keyboard.press('ArrowRight');
  await theirs.saved();
  const start = await mine.valueOf(mine.cut(3));
  await mine.cut(3).focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => mine.valueOf(mine.cut(3))).toBeGreaterThan(start);
  const kept = await mine.valueOf(mine.cut(3));
  const dialog = page.getByRole('dialog');
  await expect(dialog.getByRole('heading', { name: 'Dora Second saved months_at_address first' })).toBeVisible();
  await expect(dialog.getByRole('region', { name: 'Theirs: Dora Second' })).toContainText('Cut moved from');
  await expect(dialog.getByRole('region', { name: 'Mine' })).toContainText(`to ${kept}`);
  // Put off, it waits on the page with the work as it was.
  await dialog.getByRole('button', { name: 'Decide later' }).click();
  await expect(page.getByText('Somebody else saved first.')).toBeVisible();
  expect(await mine.valueOf(mine.cut(3))).toBe(kept);
  await page.getByRole('button', { name: 'Theirs or mine…' }).click();
  await dialog.getByRole('button', { name: 'Keep mine' }).click();
  await expect(mine.edits).toContainText('Kept own bins over those of Dora Second');
  await mine.saved();
  const stored = await mine.stored();
  expect(stored.editList.map(({ kind, by }) => [kind, by])).toEqual([
    ['cut moved', 'Dora Second'],
    ['kept own', stored.changedBy],
  ]);
  expect(stored.changedBy).not.toBe('Dora Second');
  expect(stored.current.kind === 'numeric' && stored.current.edges[2]).toBe(kept);

  // Now they are behind, and take what is there.
  await theirs.cut(2).focus();
  await other.keyboard.press('ArrowRight');
  await other.getByRole('dialog').getByRole('button', { name: 'Take theirs' }).click();
  await expect.poll(() => theirs.valueOf(theirs.cut(3))).toBe(kept);
  expect(await theirs.row('WOE')).toEqual(await mine.row('WOE'));
  await other.context().close();
  await mine.reset();

  // Everything that was saved stands in the history with who made it and who took it back.
  const history = (await (await page.request.get(`/api/binnings/${demo.binningId}/edits`)).json()) as BinningHistory;
  const here = history.edits.filter(({ column }) => column === 'months_at_address');
  expect(here.map(({ kind, by, ended }) => [kind, by === 'Dora Second', ended?.how])).toEqual([
    ['kept own', false, 'undone'],
    ['cut moved', true, 'undone'],
  ]);
});

/** Another modeller of the demo's model, signed in on a page of their own. */
async function secondModeller(
  browser: Browser,
  page: Page,
  signIns: readonly SignIn[],
  demo: DemoPlaces,
  baseURL: string,
): Promise<Page> {
  const office = await browser.newContext({ baseURL });
  const admin = await office.newPage();
  await signIn(admin, signIns, 'admin');
  const token = await inviteByMail(admin, 'Dora Second', 'modeller');
  await office.close();
  const other = await (await browser.newContext({ baseURL })).newPage();
  await other.goto('/sign-in');
  // The page has asked for its session by now, and was given the token that changes need.
  await expect(other.getByRole('button', { name: 'Sign in' })).toBeVisible();
  const password = 'samphire-grows-on-the-marsh';
  const { email } = await post<{ email: string }>(other, '/api/invitations/accept', { token, name: 'Dora Second', password });
  const { people } = (await (await page.request.get(`/api/models/${demo.modelId}/member-candidates`)).json()) as MemberCandidates;
  const person = people.find(({ name }) => name === 'Dora Second')!;
  await post(page, `/api/models/${demo.modelId}/members`, { personId: person.id });
  await signIn(other, [{ role: 'second', email, password }], 'second');
  return other;
}
