import type { CharacteristicDetail, CharacteristicList, BinningHistory } from '@tallystone/contracts/binnings/schema';
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

test('a notch that is only pressed stays; dragged, it goes to a fine edge; undone after a reload', async ({
  page,
  signInAs,
}) => {
  await signInAs('modeller');
  const bench = new BenchOnPage(page, await readDemoPlaces(page), 'oldest_line_months');
  await bench.open();
  const cut = bench.cut(3);
  const { fine } = await bench.stored();
  const start = await bench.valueOf(cut);
  const sent: string[] = [];
  page.on('request', (request) => request.method() === 'PUT' && sent.push(request.url()));
  const middle = async (): Promise<{ x: number; y: number }> => {
    const box = (await cut.locator('.vee').boundingBox())!;
    return { x: box.x + box.width / 2, y: box.y + 4 };
  };
  const at = await middle();
  for (const away of [0, 5, -5]) await page.mouse.click(at.x + away, at.y);
  // A hand that shakes, and one that thinks better of it.
  await page.mouse.move(at.x, at.y);
  await page.mouse.down();
  await page.mouse.move(at.x + 2, at.y);
  await page.mouse.up();
  await page.mouse.move(at.x, at.y);
  await page.mouse.down();
  await page.mouse.move(at.x + 40, at.y, { steps: 4 });
  await page.mouse.move(at.x, at.y, { steps: 4 });
  await page.mouse.up();
  expect(await bench.valueOf(cut)).toBe(start);
  await expect(bench.edits).toContainText('as they were classed automatically');
  await expect(page.getByRole('button', { name: 'Undo' })).toBeDisabled();

  const digits = (value: number): number => String(Math.abs(value)).replace('.', '').replace(/^0+|0+$/g, '').length; // prettier-ignore
  const drag = async (x: number): Promise<void> => {
    const from = await middle();
    await page.mouse.move(from.x, from.y);
    await page.mouse.down();
    await page.mouse.move(x, from.y, { steps: 8 });
    await page.mouse.up();
  };
  // Dragged for good it goes to a fine edge, one that is round where several are near; with Alt to the nearest.
  await drag(at.x + 30);
  const snapped = await bench.valueOf(cut);
  expect(snapped).toBeGreaterThan(start);
  expect(fine.edges).toContain(snapped);
  await page.keyboard.press('Control+z');
  await expect.poll(() => bench.valueOf(cut)).toBe(start);
  await page.keyboard.down('Alt');
  await drag(at.x + 30);
  await page.keyboard.up('Alt');
  const nearest = await bench.valueOf(cut);
  expect(fine.edges).toContain(nearest);
  expect(digits(snapped)).toBeLessThanOrEqual(digits(nearest));
  await bench.saved();

  expect(sent.length).toBeGreaterThan(0);

  // After a reload every step is still there to be taken back.
  await expect.poll(async () => (await bench.stored()).edits).toBeGreaterThan(0);
  await page.reload();
  await expect(page.getByRole('button', { name: 'Undo' })).toBeEnabled();
  const { edits } = await bench.stored();
  for (let step = 0; step < edits; step++) await page.getByRole('button', { name: 'Undo' }).click();
  await expect(page.getByRole('button', { name: 'Undo' })).toBeDisabled();
  await expect(bench.edits).toContainText('as they were classed automatically');
  await expect.poll(async () => (await bench.stored()).edits).toBe(0);
});

test('a cut that is moved on after it was saved is a second edit, and nobody took the first one back', async ({ page, signInAs }) => {
  await signInAs('modeller');
  const demo = await readDemoPlaces(page);
  const bench = new BenchOnPage(page, demo, 'oldest_line_months');
  await bench.open();
  const takenBack = async (): Promise<number> => {
    const { edits } = (await (await page.request.get(`/api/binnings/${demo.binningId}/edits`)).json()) as BinningHistory;
    return edits.filter(({ column, inEffect }) => column === 'oldest_line_months' && !inEffect).length;
  };
  const before = await takenBack();
  await bench.cut(2).focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(async () => (await bench.stored()).edits, { intervals: [50] }).toBe(1);
  await page.keyboard.press('ArrowRight');
  await expect.poll(async () => (await bench.stored()).edits).toBe(2);
  const [first, second] = (await bench.stored()).editList;
  expect([first.inEffect, second.inEffect, second.before]).toEqual([true, true, first.after]);
  expect(await takenBack()).toBe(before);
  await bench.reset();
});

test('keys that come faster than the figure is drawn move a cut from where the one before left it', async ({ page, signInAs }) => {
  await signInAs('modeller');
  const bench = new BenchOnPage(page, await readDemoPlaces(page), 'oldest_line_months');
  await bench.open();
  const { fine } = await bench.stored();
  const start = await bench.valueOf(bench.cut(2));
  const next = fine.edges.find((edge) => edge > start)!;
  const pressAtOnce = (...keys: string[]): Promise<unknown> => Promise.all(keys.map((key) => page.keyboard.press(key)));
  await bench.cut(2).focus();
  await pressAtOnce('ArrowRight', 'ArrowRight', 'ArrowLeft');
  await expect.poll(() => bench.valueOf(bench.cut(2))).toBe(next);
  await expect.poll(async () => (await bench.stored()).editList).toMatchObject([{ what: `Cut moved from ${start} to ${next}` }]);
  // Away and back is no edit.
  await bench.cut(1).focus();
  await pressAtOnce('ArrowRight', 'ArrowLeft');
  await bench.saved();
  expect((await bench.stored()).edits).toBe(1);
  await bench.reset();
});

test('a category is dragged onto another group, and sent there by keys', async ({ page, signInAs }) => {
  await signInAs('modeller');
  const demo = await readDemoPlaces(page);
  const { characteristics } = (await (
    await page.request.get(`/api/binnings/${demo.binningId}/characteristics`)
  ).json()) as CharacteristicList;
  const found = characteristics.find(({ kind, edits, bins }) => kind === 'categorical' && edits === 0 && bins > 3)!;
  const bench = new BenchOnPage(page, demo, found.column);
  await page.goto(`/models/${demo.modelId}/binning/${demo.binningId}/${found.id}`);
  const groups = async (): Promise<readonly (readonly string[])[]> => {
    const { current } = await bench.stored();
    return current.kind === 'categorical' ? current.groups : [];
  };
  const start = await groups();
  // Groups stand in order of risk, wherever that takes this one.
  const joined = async (): Promise<boolean> => (await groups()).some((group) => [...start[0], last].every((one) => group.includes(one)));
  const [first, last] = [start[0][0], start.at(-1)![0]];
  const category = (name: string): Locator => page.getByRole('checkbox', { name, exact: true });
  await expect(page.locator('.group-number')).toHaveText(start.map((_, index) => String(index + 1)));
  const middle = async (name: string): Promise<{ x: number; y: number }> => {
    const box = (await category(name).locator('.tick').boundingBox())!;
    return { x: box.x + box.width / 2, y: box.y + box.height / 2 };
  };
  await category(first).scrollIntoViewIfNeeded();
  const [from, to] = [await middle(last), await middle(first)];
  await page.mouse.move(from.x, from.y);
  await page.mouse.down();
  await page.mouse.move(to.x, to.y, { steps: 10 });
  await page.mouse.up();
  await bench.saved();
  await expect.poll(joined).toBe(true);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect.poll(groups).toEqual(start);

  await category(last).focus();
  await page.keyboard.press('1');
  await expect(bench.edits).toContainText(last);
  await expect.poll(joined).toBe(true);
  // Apart again, into the empty space beside the groups.
  const [here, edge] = [await middle(last), (await page.locator('ts-bins-figure svg').filter({ has: page.locator('.category') }).boundingBox())!];
  await page.mouse.move(here.x, here.y);
  await page.mouse.down();
  await page.mouse.move(edge.x + 40, here.y, { steps: 10 });
  await expect(page.getByText('New group', { exact: true })).toBeVisible();
  await page.mouse.up();
  await expect.poll(groups).toContainEqual([last]);
  await bench.reset();
});

test('what is looked at stands in the address', async ({ page, signInAs }) => {
  await signInAs('modeller');
  const bench = new BenchOnPage(page, await readDemoPlaces(page), 'oldest_line_months');
  await bench.open();
  await page.getByRole('radio', { name: 'Hold-out' }).click();
  await page.getByRole('radio', { name: 'Bad rate' }).click();
  await page.getByRole('radio', { name: 'By month' }).click();
  await expect(page).toHaveURL(/axis=rows.*partition=holdOut.*measure=badRate.*period=month/);
  await page.reload();
  await expect(page.getByRole('table', { name: /^Bins,\s+Hold-out$/ })).toBeVisible();
  await expect(page.getByRole('heading', { name: 'Bad rate of the bins by month of application' })).toBeVisible();
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
    ['cut moved', stored.changedBy],
  ]);
  expect(stored.changedBy).not.toBe('Dora Second');
  expect(stored.current.kind === 'numeric' && stored.current.edges[2]).toBe(kept);

  // Now they are behind, and take what is there.
  await theirs.cut(2).focus();
  await other.keyboard.press('ArrowRight');
  await other.getByRole('dialog').getByRole('button', { name: 'Take theirs' }).click();
  await expect.poll(() => theirs.valueOf(theirs.cut(3))).toBe(kept);
  expect(await theirs.row('WOE')).toEqual(await mine.row('WOE'));
  // What they had is one undo away, and one redo from what they took.
  const taken = await theirs.valueOf(theirs.cut(2));
  await other.getByRole('button', { name: 'Undo' }).click();
  await expect.poll(() => theirs.valueOf(theirs.cut(2))).toBeGreaterThan(taken);
  await other.getByRole('button', { name: 'Redo' }).click();
  await expect.poll(() => theirs.valueOf(theirs.cut(2))).toBe(taken);
  await theirs.saved();
  await other.context().close();
  await mine.reset();

  // Everything that was saved stands in the history with who made it and who took it back.
  const history = (await (await page.request.get(`/api/binnings/${demo.binningId}/edits`)).json()) as BinningHistory;
  const here = history.edits.filter(({ column }) => column === 'months_at_address');
  const ends = here.map(({ kind, by, ended }) => [kind, by === 'Dora Second', ended?.how]);
  expect(ends.slice(-3)).toEqual([
    ['cut moved', false, 'undone'],
    ['kept own', false, 'undone'],
    ['cut moved', true, 'undone'],
  ]);
  expect(here.every(({ inEffect }) => !inEffect)).toBe(true);
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
