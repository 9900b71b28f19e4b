import type { Binning, CharacteristicDetail, CharacteristicList } from '@tallystone/contracts/binnings/schema';
import type { Locator, Page } from '@playwright/test';
import { defineSample, enterEmptyModel, post, succeeded } from '../support/demo-places';
import { expect, test } from '../support/rooms';

/**
 * Sixty categories with long names that begin alike, in a figure that is wider than the page: dragged from one end to the other, set apart from where the
 * place for a new group would be out of sight, told apart by the ends of their names, and named once they are chosen.
 */
test.describe.configure({ mode: 'serial', timeout: 90_000 });

const kinds = Array.from({ length: 60 }, (_, place) => `Job in the register, group ${String(place + 1).padStart(2, '0')}`);

/** Risk rises with the number of the category, so that they fall into several groups, the last ones at the right end. */
function applicants(rows: number): string {
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

let address = '';
let stored: (page: Page) => Promise<readonly (readonly string[])[]>;

test.beforeAll(async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  const { id } = await enterEmptyModel(page, `Jobs of many kinds ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`);
  const { definitionId } = await defineSample(page, id, applicants(6000), (content) => ({
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
  address = `/models/${id}/binning/${binning.id}/${job.id}`;
  stored = async (there) => {
    const answer = await there.request.get(`/api/binnings/${binning.id}/characteristics/${job.id}`);
    const { current } = (await answer.json()) as CharacteristicDetail;
    return current.kind === 'categorical' ? current.groups : [];
  };
});

test.afterEach(async ({ roomOf }) => {
  expect((await roomOf('modeller')).takeProblems(), 'errors, violations and refused requests').toEqual([]);
});

/** The figure, scrolled to its right end. */
async function open(page: Page): Promise<{ frame: Locator; bounds: { left: number; right: number }; last: Locator }> {
  await page.goto(address);
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
  const { frame, bounds, last } = await open(page);
  const before = await stored(page);
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
  await expect.poll(() => stored(page)).toContainEqual([name]);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect.poll(() => stored(page)).toEqual(before);
});

test('a category is dragged to a group at the other end, which comes into sight', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  const { frame, bounds, last } = await open(page);
  const before = await stored(page);
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
  await expect.poll(async () => (await stored(page)).find((group) => group.includes(before[0][0]))).toContain(name);
  await page.getByRole('button', { name: 'Undo' }).click();
  await expect.poll(() => stored(page)).toEqual(before);

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
  await open(page);
  const labels = await page.locator('ts-bins-figure .category text').allTextContents();
  expect(new Set(labels.map((label) => label.trim())).size).toBe(60);
  for (const name of [kinds[16], kinds[41]]) await page.getByRole('checkbox', { name, exact: true }).press(' ');
  await expect(page.getByText('2 categories chosen: Job in the register, group 17, Job in the register, group 42')).toBeVisible();
  await page.setViewportSize({ width: 390, height: 844 });
  await expect(page.getByText('2 categories chosen: Job in the register')).toBeVisible();
  const wide = await page.evaluate('document.documentElement.scrollWidth > document.documentElement.clientWidth');
  expect(wide).toBe(false);
  await page.setViewportSize({ width: 1280, height: 900 });
});
