import type { Browser, Locator, Page } from '@playwright/test';
import type { MemberCandidates } from '@tallystone/contracts/models/schema';
import type { Draft } from '@tallystone/contracts/samples/definition';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { SampleList } from '@tallystone/contracts/samples/schema';
import { bringIn, enterEmptyModel, inviteByMail, post, succeeded } from '../support/demo-places';
import { expect, test } from '../support/rooms';

/** Two people edit the draft of one sample: whoever saves second sees both, wherever the page is scrolled to, and nothing of either is lost. */
test.describe.configure({ timeout: 90_000 });

const password = 'cockles-under-the-pier';

/** A second modeller, in a browser of their own. */
async function newcomer(browser: Browser, admin: Page, name: string): Promise<Page> {
  const token = await inviteByMail(admin, name, 'modeller');
  const context = await browser.newContext({
    baseURL: process.env['TALLYSTONE_E2E_URL'],
    viewport: { width: 1280, height: 900 },
  });
  const page = await context.newPage();
  await page.goto('/sign-in');
  const { email } = await post<{ email: string }>(page, '/api/invitations/look-up', { token });
  await post(page, '/api/invitations/accept', { token, name, password });
  await page.getByLabel('E-mail address').fill(email);
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page).not.toHaveURL(/sign-in/, { timeout: 30_000 });
  return page;
}

const enter = async (field: Locator, text: string): Promise<void> => {
  await field.fill(text);
  await field.blur();
};
const saved = (page: Page): Locator => page.getByRole('status').filter({ hasText: /^Saved / });

test('two people change one draft: both changes are shown, and both stay', async ({ roomOf, browser }) => {
  const { page, takeProblems } = await roomOf('modeller');
  const { id } = await enterEmptyModel(page, `Two at one draft ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`);
  const lines = Array.from(
    { length: 400 },
    (_, row) => `${20 + (row % 50)},${['owner', 'rent', 'STAFF'][row % 3]},${row % 8 === 0 ? 1 : 0}`,
  );
  await bringIn(page, id, 'applicants.csv', `age,home,bad\n${lines.join('\n')}\n`);
  const { samples } = (await (await page.request.get(`/api/models/${id}/samples`)).json()) as SampleList;
  const sample = `/models/${id}/sample/${samples[0].id}`;
  const { choices } = await post<{ choices: object }>(page, `/api${sample.replace('/sample/', '/samples/')}/preview`, {});
  await succeeded(page, await post<Run>(page, `/api${sample.replace('/sample/', '/samples/')}/readings`, choices));
  const draft = async (): Promise<Draft> =>
    (await (await page.request.get(`/api${sample.replace('/sample/', '/samples/')}/draft`)).json()) as Draft;

  const other = await newcomer(browser, (await roomOf('admin')).page, 'Nils Newcomer');
  const { people } = (await (await page.request.get(`/api/models/${id}/member-candidates`)).json()) as MemberCandidates;
  const { id: personId } = people.find(({ name }) => name === 'Nils Newcomer')!;
  await post(page, `/api/models/${id}/members`, { personId });
  await page.goto(`${sample}/definition`);
  const seed = page.getByLabel('Seed', { exact: true });
  await expect(seed).toHaveValue('1');
  await other.goto(`${sample}/definition`);
  const theirs = other.getByRole('region', { name: 'Exclusions' });
  await theirs.getByRole('button', { name: 'Add an exclusion' }).click();
  await enter(theirs.getByLabel('Reason'), 'Staff loans');
  await expect.poll(async () => (await draft()).content.exclusions.map(({ reason }) => reason)).toEqual(['Staff loans']);
  await expect(saved(other)).toBeVisible();

  // The field is below what is in sight at the top of the page: the dialog comes to where the person is.
  await enter(seed, '7');
  const dialog = page.getByRole('dialog', { name: 'Nils Newcomer saved this draft first' });
  await expect(dialog.getByRole('region', { name: 'Changed by Nils Newcomer' })).toContainText('1. Staff loans');
  await expect(dialog.getByRole('region', { name: 'Changed by you' })).toContainText('by seed 7');
  await expect(dialog.getByRole('region', { name: 'Changed by both' })).toHaveCount(0);
  await dialog.getByRole('button', { name: 'Decide later' }).click();
  await expect(dialog).toHaveCount(0);
  await page.getByRole('button', { name: 'Confirm the definition' }).scrollIntoViewIfNeeded();
  const notice = page.getByRole('note', { name: 'To decide' }).filter({ hasText: 'Nils Newcomer saved this draft first' });
  await expect(notice).toBeInViewport({ ratio: 1 });
  await expect(page.getByText('Yours is not saved: someone else saved this draft first.')).toBeVisible();
  expect((await draft()).content.partition).toMatchObject({ seed: 1 });
  await notice.getByRole('button', { name: 'Compare and decide' }).click();
  await dialog.getByRole('button', { name: 'Keep both' }).click();
  await expect(notice).toHaveCount(0);
  await expect(saved(page)).toBeVisible();
  const both = (await draft()).content;
  expect([both.partition, both.exclusions.map(({ reason }) => reason)]).toEqual([
    { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null },
    ['Staff loans'],
  ]);
  await expect(page.getByRole('region', { name: 'Exclusions' }).getByLabel('Reason')).toHaveValue('Staff loans');

  // The other person changes the same thing under what they had read: one gives way, and can be had back.
  await enter(other.getByLabel('Seed', { exact: true }), '9');
  const asked = other.getByRole('dialog', { name: 'Mara Modeller saved this draft first' });
  await expect(asked.getByRole('region', { name: 'Changed by both' })).toContainText('by seed 9');
  await expect(asked.getByRole('button', { name: 'Keep both' })).toHaveCount(0);
  await asked.getByRole('button', { name: 'Take theirs' }).click();
  await expect(other.getByLabel('Seed', { exact: true })).toHaveValue('7');
  await other.getByRole('button', { name: 'Bring mine back' }).click();
  await expect.poll(async () => (await draft()).content.partition).toMatchObject({ seed: 9 });
  expect((await draft()).content.exclusions.map(({ reason }) => reason)).toEqual(['Staff loans']);

  // Columns: the part of the chosen column is in sight, and so is the notice above it.
  await page.goto(`${sample}/columns?column=age`);
  await other.goto(`${sample}/columns?column=home`);
  await other.getByLabel('Protected attribute').check();
  await expect.poll(async () => (await draft()).content.columns.find(({ column }) => column === 'home')?.protected).toBe(true);
  await page.getByLabel('Protected attribute').check();
  const again = page.getByRole('dialog', { name: 'Nils Newcomer saved this draft first' });
  await expect(again).toContainText('home: protected');
  await expect(again).toContainText('age: protected');
  await again.getByRole('button', { name: 'Keep both' }).click();
  await expect
    .poll(async () => (await draft()).content.columns.filter(({ protected: is }) => is).map(({ column }) => column))
    .toEqual(['age', 'home']);

  // Each save that came second was refused, and nothing else went wrong.
  const problems = takeProblems();
  expect(problems.filter((problem) => !problem.includes('412'))).toEqual([]);
  await other.context().close();
});
