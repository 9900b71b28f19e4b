import { Client } from 'pg';
import type {
  Binning,
  CharacteristicDetail,
  CharacteristicList,
  CharacteristicSummary,
} from '@tallystone/contracts/binnings/schema';
import type { Locator, Page } from '@playwright/test';
import { pick } from '../support/browser';
import { defineSample, enterEmptyModel, post, succeeded } from '../support/demo-places';
import { expect, test } from '../support/rooms';

/**
 * The list of characteristics of a binning of its own: many are classed anew by a run that is watched and cancelled, one is left out and taken in again, and
 * what is searched, shown and sorted stands in the address. Then one of them on the bench, whose cuts go to round numbers by a key, and a binning of many
 * categories. All in one file, one after the other: a binning that is made elsewhere meanwhile would wait for the counts that are held here.
 */
test.describe.configure({ mode: 'serial', timeout: 60_000 });

/** About how large each is, in the units of the invented file. */
const scales: Readonly<Record<string, number>> = {
  monthly_income: 2400,
  rent: 700,
  amount: 6000,
  savings: 3000,
  average_balance: 900,
  unsecured_balance: 4000,
  card_utilisation: 45,
  months_at_address: 60,
  months_in_job: 48,
  oldest_line_months: 90,
  overdrawn_days: 20,
  form_minutes: 14,
};
const numeric = Object.keys(scales);
const names = [...numeric, 'home', 'channel'];

/** Park and Miller, CACM 31, 1988: the same file on every machine. */
let state = 77;
const random = (): number => (state = (state * 48271) % 2147483647) / 2147483647;

/** Applicants whose risk the later columns tell better than the earlier ones, with none, one or two decimals. */
function applicants(rows: number): string {
  const lines = [['application_id', 'applied_on', ...names, 'bad'].join(',')];
  for (let row = 0; row < rows; row++) {
    const risk = random() + random() - 1;
    const values = numeric.map((name, place) =>
      (scales[name] * (0.2 + Math.abs(1 + (place / 12) * risk + (random() - 0.5)))).toFixed(place % 3),
    );
    const home = risk + random() < 0.3 ? 'owner' : ['rent', 'parents'][row % 2];
    const channel = ['branch', 'web', 'phone'][Math.floor(random() * 3)];
    const day = new Date(Date.UTC(2023, 0, 1 + (row % 700))).toISOString().slice(0, 10);
    const bad = random() < 1 / (1 + Math.exp(1.2 - 2.5 * risk)) ? 1 : 0;
    lines.push([`SM-${300_000 + row}`, day, ...values, home, channel, bad].join(','));
  }
  return `${lines.join('\n')}\n`;
}

let binningId = '';
let address = '';

test.beforeAll(async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  const { id } = await enterEmptyModel(
    page,
    `Overdrafts, classed in several ways ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`,
  );
  const { definitionId } = await defineSample(page, id, applicants(3000), (content) => ({
    ...content,
    partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null },
  }));
  const binning = await post<Binning>(page, `/api/models/${id}/binnings`, { definitionId, name: 'First binning' });
  await succeeded(page, { id: binning.runId! });
  binningId = binning.id;
  address = `/models/${id}/binning/${binning.id}`;
});

test.afterEach(async ({ roomOf }) => {
  expect((await roomOf('modeller')).takeProblems(), 'errors, violations and refused requests').toEqual([]);
});

const listOf = (page: Page): Locator => page.getByRole('region', { name: 'Characteristics' });
const rowOf = (page: Page, column: string): Locator =>
  listOf(page)
    .getByRole('row')
    .filter({ has: page.getByRole('rowheader', { name: column, exact: true }) });
async function open(page: Page): Promise<void> {
  await page.goto(address);
  await expect(rowOf(page, 'form_minutes')).toBeVisible();
}
const shown = (page: Page): Promise<string[]> => listOf(page).getByRole('rowheader').allInnerTexts();
async function stored(page: Page): Promise<readonly CharacteristicSummary[]> {
  const { characteristics } = (await (
    await page.request.get(`/api/binnings/${binningId}/characteristics`)
  ).json()) as CharacteristicList;
  return characteristics;
}
async function detailOf(page: Page, column: string): Promise<CharacteristicDetail> {
  const { id } = (await stored(page)).find((one) => one.column === column)!;
  return (await (await page.request.get(`/api/binnings/${binningId}/characteristics/${id}`)).json()) as CharacteristicDetail;
}
/** The number of bins of every characteristic, as the list has it. */
async function binsShown(page: Page): Promise<Record<string, string>> {
  const headings = await listOf(page).getByRole('columnheader').allInnerTexts();
  // The first heading is that of the rows' own headings.
  const place = headings.findIndex((heading) => heading.trim() === 'Bins') - 1;
  const columns = await shown(page);
  return Object.fromEntries(
    await Promise.all(
      columns.map(async (column) => [column, await rowOf(page, column).getByRole('cell').nth(place).innerText()]),
    ),
  ) as Record<string, string>;
}
const binsOf = (list: readonly CharacteristicSummary[]): Record<string, string> =>
  Object.fromEntries(list.map(({ column, bins }) => [column, String(bins)]));

/** Classing anew reads the counts by month of each characteristic: while they are held it is under way. */
async function held<T>(work: (letGo: () => Promise<void>) => Promise<T>): Promise<T> {
  const client = new Client({ connectionString: process.env['TALLYSTONE_E2E_DATABASE'] });
  await client.connect();
  try {
    await client.query('BEGIN');
    await client.query('LOCK TABLE binning_months IN ACCESS EXCLUSIVE MODE');
    return await work(async () => void (await client.query('COMMIT')));
  } finally {
    await client.end();
  }
}

async function classAllAnew(page: Page, mostBins: string): Promise<void> {
  await page.getByRole('checkbox', { name: 'Choose all shown' }).check();
  await expect(page.getByText(`${names.length} characteristics chosen`)).toBeVisible();
  await page.getByRole('button', { name: 'Class anew…' }).click();
  const dialog = page.getByRole('dialog', { name: `Class ${names.length} characteristics anew` });
  await dialog.getByLabel('Most bins').fill(mostBins);
  await dialog.getByRole('button', { name: 'Class anew' }).click();
  await expect(dialog).toHaveCount(0);
}
const progress = (page: Page): Locator => page.getByRole('progressbar', { name: 'Classing anew' });

test('more than ten are classed anew by a run, which is watched wherever it was started', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  const before = await stored(page);
  expect(before).toHaveLength(names.length);
  expect(await binsShown(page)).toEqual(binsOf(before));

  await held(async (letGo) => {
    await classAllAnew(page, '3');
    await expect(progress(page)).toHaveAttribute('aria-valuenow', '0');
    // One at a time.
    await page.getByRole('checkbox', { name: 'Choose rent' }).check();
    await expect(page.getByRole('button', { name: 'Class anew…' })).toBeDisabled();
    expect(await binsShown(page)).toEqual(binsOf(before));
    await page.reload();
    await expect(progress(page)).toHaveAttribute('aria-valuenow', '0');
    await letGo();
    await expect(progress(page)).toHaveCount(0);
  });
  // Not more than three, beside one for what is missing.
  const after = await stored(page);
  await expect.poll(() => binsShown(page)).toEqual(binsOf(after));
  for (const column of numeric) {
    const { current, constraints } = await detailOf(page, column);
    expect(current.kind === 'numeric' && current.edges.length).toBeLessThanOrEqual(2);
    expect(constraints.mostBins).toBe(3);
  }
  expect(Number((await binsShown(page))['form_minutes'])).toBeLessThan(
    before.find(({ column }) => column === 'form_minutes')!.bins,
  );
});

test('the run is cancelled, and nothing of it is kept', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  const before = await stored(page);
  await held(async (letGo) => {
    await classAllAnew(page, '6');
    await expect(progress(page)).toHaveAttribute('aria-valuenow', '0');
    await page.getByRole('button', { name: 'Cancel' }).click();
    await expect(page.getByRole('button', { name: 'Stopping' })).toBeDisabled();
    await letGo();
    await expect(page.getByText('Classing anew was cancelled. Nothing of it was kept.')).toBeVisible();
  });
  expect(await stored(page)).toEqual(before);
  expect(await binsShown(page)).toEqual(binsOf(before));
  await page.reload();
  await expect.poll(() => binsShown(page)).toEqual(binsOf(before));
});

test('one is left out with its reason, and taken in again', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  await page.getByRole('checkbox', { name: 'Choose channel' }).check();
  await expect(page.getByRole('button', { name: 'Take in' })).toHaveCount(0);
  await page.getByRole('button', { name: 'Leave out…' }).click();
  const dialog = page.getByRole('dialog', { name: 'Leave channel out?' });
  await dialog.getByRole('button', { name: 'Leave out' }).click();
  await expect(dialog.getByRole('alert')).toHaveText('Say why; it is kept in the record.');
  await dialog.getByRole('radio', { name: 'Tells nobody apart' }).check();
  await dialog.getByRole('button', { name: 'Leave out' }).click();
  await expect(rowOf(page, 'channel')).toContainText('left out: Tells nobody apart');

  await pick(page, page, 'Show', 'Left out');
  await expect.poll(() => shown(page)).toEqual(['channel']);
  await page.reload();
  await expect(rowOf(page, 'channel')).toContainText('left out: Tells nobody apart');
  await page.getByRole('checkbox', { name: 'Choose channel' }).check();
  await expect(page.getByRole('button', { name: 'Leave out…' })).toHaveCount(0);
  await page.getByRole('button', { name: 'Take in' }).click();
  await expect(listOf(page)).toContainText('No characteristic fits this search.');
  await pick(page, page, 'Show', 'All');
  await expect(rowOf(page, 'channel')).toContainText('included');
  expect((await stored(page)).every(({ included }) => included)).toBe(true);
});

test('search, part and order stand in the address and are there after a reload', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  const heading = (name: string): Locator => listOf(page).getByRole('columnheader', { name: new RegExp(`^${name}`) });
  const byIv = [...(await stored(page))].sort((a, b) => b.informationValue - a.informationValue).map(({ column }) => column);
  await expect.poll(() => shown(page)).toEqual(byIv);
  await expect(heading('IV').first()).toHaveAttribute('aria-sort', 'descending');
  await heading('Characteristic').getByRole('button').click();
  await expect.poll(() => shown(page)).toEqual([...names].sort());
  await page.getByRole('searchbox', { name: 'Characteristic' }).fill('month');
  const found = [...names].sort().filter((name) => name.includes('month'));
  await expect.poll(() => shown(page)).toEqual(found);
  await pick(page, page, 'Show', 'Included');
  await expect(page).toHaveURL(/sort=column\.up/);
  await expect(page).toHaveURL(/search=month/);
  await expect(page).toHaveURL(/show=included/);

  await page.reload();
  await expect.poll(() => shown(page)).toEqual(found);
  await expect(page.getByRole('searchbox', { name: 'Characteristic' })).toHaveValue('month');
  await expect(page.getByRole('combobox', { name: 'Show' })).toHaveText('Included');
  await expect(heading('Characteristic')).toHaveAttribute('aria-sort', 'ascending');
  await heading('Characteristic').getByRole('button').click();
  await expect.poll(() => shown(page)).toEqual([...found].reverse());
});

test('a key takes a cut on the bench to a round number, and undo gives it back', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  await rowOf(page, 'amount').getByRole('link').click();
  const cuts = page.getByRole('slider', { name: /^Cut \d+ of/ });
  const edits = page.getByRole('region', { name: 'Edits by hand' });
  await expect(cuts).toHaveCount(2);
  const values = (): Promise<number[]> =>
    cuts.evaluateAll((notches) => notches.map((notch) => Number(notch.getAttribute('aria-valuenow'))));
  const start = await values();
  const digits = (value: number): number => String(value).replace('.', '').replace(/0+$/, '').length;

  // What the keys do is told under the question mark.
  await page.keyboard.press('?');
  const list = page.getByRole('dialog', { name: 'Shortcuts' });
  await expect(list).toContainText('Move the selected cut to a round number');
  await page.keyboard.press('Escape');
  await expect(list).toHaveCount(0);

  // Cuts that were classed are round; two are typed that are not.
  const typed: number[] = [];
  for (const [place, value] of start.entries()) {
    typed[place] = value + 1.37;
    await cuts.nth(place).focus();
    await page.keyboard.press('Enter');
    await page.getByRole('spinbutton', { name: 'Selected cut at' }).fill(String(typed[place]));
    await page.keyboard.press('Enter');
    await expect.poll(async () => (await values())[place]).toBe(typed[place]);
  }
  await cuts.first().focus();
  await page.keyboard.press('r');
  // As the axis writes it, with a narrow blank before three digits.
  await expect(edits).toContainText(`Cut moved from ${String(typed[0]).replace(/(\d)(?=\d{3}(\.|$))/, '$1\u202F')} to `);
  const [first, untouched] = await values();
  expect(digits(first)).toBeLessThan(digits(typed[0]));
  expect(untouched).toBe(typed[1]);
  // The second one by the page's own shortcut: what is selected is moved, wherever the focus is. The button says where to.
  await cuts.nth(1).click();
  const words = await page.getByRole('button', { name: /^Round to / }).innerText();
  const to = Number(/^Round to (.*)$/.exec(words)![1].replaceAll(/\s/g, ''));
  await edits.getByRole('heading', { name: 'Edits by hand' }).click();
  await page.keyboard.press('r');
  await expect.poll(values).toEqual([first, to]);
  expect(digits(to)).toBeLessThan(digits(typed[1]));
  // Round already, there is nowhere to go.
  await expect(page.getByRole('button', { name: 'Round already' })).toBeDisabled();
  await page.keyboard.press('r');
  expect(await values()).toEqual([first, to]);
  await expect.poll(async () => (await detailOf(page, 'amount')).current).toMatchObject({ edges: [first, to] });

  await page.keyboard.press('Control+z');
  await expect.poll(values).toEqual([first, typed[1]]);
  await page.keyboard.press('Control+z');
  await expect.poll(values).toEqual(typed);
  await page.keyboard.press('Control+z');
  await page.keyboard.press('Control+z');
  await expect.poll(values).toEqual(start);
  await expect(edits).toContainText('as they were classed automatically');
  await expect.poll(async () => (await detailOf(page, 'amount')).edits).toBe(0);
  expect((await detailOf(page, 'amount')).current).toMatchObject({ edges: start });
});

/**
 * Sixty categories with long names that begin alike, in a figure that is wider than the page: dragged from one end to the other, set apart from where the
 * place for a new group would be out of sight, told apart by the ends of their names, and named once they are chosen.
 */
test.describe('sixty categories', () => {
  const kinds = Array.from({ length: 60 }, (_, place) => `Job in the register, group ${String(place + 1).padStart(2, '0')}`);

  /** Risk rises with the number of the category, so that they fall into several groups, the last ones at the right end. */
  function jobHolders(rows: number): string {
    // Park and Miller, CACM 31, 1988: the same file on every machine.
    let state = 99;
    const random = (): number => (state = (state * 48271) % 2147483647) / 2147483647;
    const lines = ['application_id,job,bad'];
    for (let row = 0; row < rows; row++) {
      const kind = Math.floor(random() * kinds.length);
      const bad = random() < 0.05 + (0.5 * kind) / kinds.length ? 1 : 0;
      lines.push(`SM-${400_000 + row},"${kinds[kind]}",${bad}`);
    }
    return `${lines.join('\n')}\n`;
  }

  let jobs = { address: '', detail: '' };

  test.beforeAll(async ({ roomOf }) => {
    const { page } = await roomOf('modeller');
    const { id } = await enterEmptyModel(page, `Jobs of many kinds ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`);
    const { definitionId } = await defineSample(page, id, jobHolders(6000), (content) => ({
      ...content,
      columns: content.columns.map((column) =>
        column.column === 'job' ? { ...column, role: 'characteristic', reason: null } : column,
      ),
      partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null },
    }));
    const binning = await post<Binning>(page, `/api/models/${id}/binnings`, { definitionId, name: 'First binning' });
    await succeeded(page, { id: binning.runId! });
    const list = (await (await page.request.get(`/api/binnings/${binning.id}/characteristics`)).json()) as CharacteristicList;
    const job = list.characteristics.find(({ column }) => column === 'job')!;
    jobs = {
      address: `/models/${id}/binning/${binning.id}/${job.id}`,
      detail: `/api/binnings/${binning.id}/characteristics/${job.id}`,
    };
  });

  async function groups(page: Page): Promise<readonly (readonly string[])[]> {
    const { current } = (await (await page.request.get(jobs.detail)).json()) as CharacteristicDetail;
    return current.kind === 'categorical' ? current.groups : [];
  }

  /** The figure, scrolled to its right end. */
  async function openJobs(page: Page): Promise<{ frame: Locator; bounds: { left: number; right: number }; last: Locator }> {
    await page.goto(jobs.address);
    const frame = page.locator('ts-bins-figure .chart');
    await expect(page.getByRole('checkbox', { name: kinds[0], exact: true })).toBeVisible();
    await frame.evaluate((element) => (element.scrollLeft = element.scrollWidth));
    const box = (await frame.boundingBox())!;
    const last = page.locator('ts-bins-figure .category').last();
    await last.scrollIntoViewIfNeeded();
    return { frame, bounds: { left: box.x, right: box.x + box.width }, last };
  }

  const middleOf = async (category: Locator): Promise<{ x: number; y: number }> => {
    const box = (await category.locator('.tick').boundingBox())!;
    return { x: box.x + box.width / 2, y: box.y + box.height / 2 };
  };

  test('a category dragged to the edge of what is in sight can be set apart there, and joins nothing that is out of sight', async ({
    roomOf,
  }) => {
    const { page } = await roomOf('modeller');
    const { frame, bounds, last } = await openJobs(page);
    const before = await groups(page);
    const name = (await last.getAttribute('data-category'))!;
    const from = await middleOf(last);
    await page.mouse.move(from.x, from.y);
    await page.mouse.down();
    await page.mouse.move(bounds.left + 20, from.y, { steps: 10 });
    const place = page.getByText('New group', { exact: true });
    await expect(place).toBeInViewport();
    const box = (await place.boundingBox())!;
    expect(box.x).toBeGreaterThan(bounds.left);
    expect(box.x + box.width).toBeLessThan(bounds.right);
    await expect(page.locator('.apart.over')).toHaveCount(1);
    // The figure has scrolled, and the place with it.
    await expect.poll(() => frame.evaluate((element) => element.scrollLeft)).toBe(0);
    await expect(place).toBeInViewport();
    await page.mouse.up();
    await expect.poll(() => groups(page)).toContainEqual([name]);
    await page.getByRole('button', { name: 'Undo' }).click();
    await expect.poll(() => groups(page)).toEqual(before);
  });

  test('a category is dragged to a group at the other end, which comes into sight', async ({ roomOf }) => {
    const { page } = await roomOf('modeller');
    const { frame, bounds, last } = await openJobs(page);
    const before = await groups(page);
    const name = (await last.getAttribute('data-category'))!;
    const from = await middleOf(last);
    // Above the categories, where their bars are.
    const y = from.y - 120;
    await page.mouse.move(from.x, y);
    await page.mouse.down();
    await page.mouse.move(bounds.left + 10, y, { steps: 10 });
    await expect.poll(() => frame.evaluate((element) => element.scrollLeft)).toBe(0);
    const first = await middleOf(page.locator('ts-bins-figure .category').first());
    await page.mouse.move(first.x, y, { steps: 4 });
    await page.mouse.up();
    await expect.poll(async () => (await groups(page)).find((group) => group.includes(before[0][0]))).toContain(name);
    await page.getByRole('button', { name: 'Undo' }).click();
    await expect.poll(() => groups(page)).toEqual(before);

    // Let go beyond the figure, it goes nowhere.
    await frame.evaluate((element) => (element.scrollLeft = 600));
    const middle = await middleOf(page.locator('ts-bins-figure .category').nth(30));
    await page.mouse.move(middle.x, middle.y);
    await page.mouse.down();
    await page.mouse.move(bounds.right + 15, middle.y, { steps: 5 });
    await page.mouse.up();
    await expect(page.getByRole('region', { name: 'Edits by hand' })).toContainText('as they were classed automatically');
  });

  test('names that begin alike are told apart by their ends, and the chosen ones are named', async ({ roomOf }) => {
    const { page } = await roomOf('modeller');
    await openJobs(page);
    const labels = await page.locator('ts-bins-figure .category text').allTextContents();
    expect(new Set(labels.map((label) => label.trim())).size).toBe(60);
    for (const name of [kinds[16], kinds[41]]) await page.getByRole('checkbox', { name, exact: true }).press(' ');
    await expect(
      page.getByText('2 categories chosen: Job in the register, group 17, Job in the register, group 42'),
    ).toBeVisible();
    await page.setViewportSize({ width: 390, height: 844 });
    await expect(page.getByText('2 categories chosen: Job in the register')).toBeVisible();
    const wide = await page.evaluate('document.documentElement.scrollWidth > document.documentElement.clientWidth');
    expect(wide).toBe(false);
    await page.setViewportSize({ width: 1280, height: 900 });
  });
});
