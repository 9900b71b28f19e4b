import { execFileSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import type { Locator, Page } from '@playwright/test';
import type { Result } from '@tallystone/contracts/result/types';
import type { Scorecard } from '@tallystone/contracts/scorecards/schema';
import type { ValidationWork } from '@tallystone/contracts/validation/schema';
import type { Version } from '@tallystone/contracts/versions/schema';
import { expect, pick, test } from '../support/browser';

/**
 * The whole line in the browser, on the applications of Saltmarsh Mutual, by three people: the modeller brings the file in, classes, fits,
 * scales, freezes and submits; the validator replicates and concludes; compliance documents and accepts. At the end the document's text is
 * held against the API's numbers.
 */
const file = fileURLToPath(new URL('../../data-demo/saltmarsh-personal-loans.csv', import.meta.url));

/** As data-demo/dictionary.csv states them. */
const bureau = { '-999': 'no bureau record' };
const member = { '-998': 'not a member when applying' };
const specialCodes: Readonly<Record<string, Readonly<Record<string, string>>>> = {
  months_as_member: member,
  average_balance_6m: member,
  overdrawn_days_6m: member,
  open_credit_lines: bureau,
  unsecured_balance: bureau,
  card_utilisation: { ...bureau, '-997': 'no card' },
  months_since_arrears: { ...bureau, '-996': 'never in arrears' },
  worst_arrears_24m: bureau,
  lines_in_arrears_24m: bureau,
  enquiries_6m: bureau,
  enquiries_12m: bureau,
  oldest_line_months: bureau,
  court_records_6y: bureau,
};

/** What the author writes, by the heading of its section. */
const texts: Readonly<Record<string, string>> = {
  Recommendation: 'Use it to rank applications of new customers.',
  'Rationale of the exclusions': 'Loans to staff follow rules of their own.',
  'Justification of the outcome': 'From 90 days past due few loans return to order.',
  'Suitability of the sources': 'One file of the loan system, reconciled with the ledger.',
  'Why this penalty': 'The one-standard-error rule keeps the model small.',
  'Business sense': 'Each characteristic describes willingness or ability to repay.',
  'Sign exceptions': 'None.',
  'Interpretation of the performance': 'It separates well; the last half-year drifts.',
  'Limitations and assumptions': 'Built on accepted applicants alone.',
  'Monitoring plan': 'PSI, AUC and calibration each quarter.',
  'Reasons for the change': 'First version.',
};

test.describe.configure({ mode: 'serial', timeout: 240_000 });
test.use({ actionTimeout: 60_000 });

let modelId = '';
let fitId = '';
let versionId = '';

/** Goes to a step of the work through its rule. */
async function toStep(page: Page, step: string): Promise<void> {
  await page.getByRole('navigation', { name: 'Steps of the work' }).getByRole('link', { name: new RegExp(`^${step}`) }).click();
}

async function openModel(page: Page): Promise<void> {
  await page.goto(`/models/${modelId}`);
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Personal loans, new scorecard');
}

test('a modeller enters a model and brings the file in', async ({ page, signInAs }) => {
  await signInAs('modeller');
  await page.getByRole('link', { name: 'New model' }).click();
  await page.getByLabel('Name', { exact: true }).fill('Personal loans, new scorecard');
  await page.getByLabel('Purpose').fill('Ranks applications for personal loans by the odds of being repaid within twelve months.');
  await page.getByLabel('Product').fill('Unsecured personal loan');
  await page.getByLabel('Jurisdiction').fill('To be confirmed by counsel');
  await page.getByLabel('Population').fill('New applications through every channel but loans to staff');
  await page.getByLabel('Owner').fill('Head of Credit Risk');
  await page.getByRole('radio', { name: /^Tier 2/ }).check();
  await page.getByRole('button', { name: 'Enter the model' }).click();
  await expect(page).toHaveURL(/\/models\/[0-9a-f-]{36}\/sample$/);
  modelId = /models\/([0-9a-f-]{36})/.exec(page.url())![1];

  await page.getByLabel('CSV file').setInputFiles(file);
  await expect(page).toHaveURL(/\/reading$/, { timeout: 60_000 });
  await expect(page.getByRole('heading', { name: 'Reading choices' })).toBeVisible();
  await expect(page.getByRole('combobox', { name: 'Delimiter' })).toHaveText(/Comma/);
  await expect(page.getByLabel('Missing, beside the empty field')).toHaveValue('NA');
  await page.getByRole('button', { name: 'Read the file', exact: true }).click();
  await expect(page).toHaveURL(/\/columns/, { timeout: 90_000 });
  await expect(page.getByRole('region', { name: 'Columns of the sample' }).getByRole('row')).toHaveCount(39);
});

test('states what columns and outcomes mean, and confirms the definition', async ({ page, signInAs }) => {
  await signInAs('modeller');
  await openModel(page);
  await toStep(page, 'Sample');
  await page.getByRole('link', { name: 'saltmarsh-personal-loans.csv' }).click();
  await expect(page).toHaveURL(/\/columns/);
  const table = page.getByRole('region', { name: 'Columns of the sample' });
  const row = (column: string): Locator => table.getByRole('row').filter({ has: page.getByRole('button', { name: column, exact: true }) });
  const open = async (column: string): Promise<void> => {
    await page.getByRole('button', { name: column, exact: true }).click();
    await expect(row(column).getByRole('button')).toHaveAttribute('aria-pressed', 'true');
  };

  for (const [column, codes] of Object.entries(specialCodes)) {
    await open(column);
    for (const [code, meaning] of Object.entries(codes)) {
      await page.locator('p', { hasText: `${code}:` }).getByRole('button', { name: 'Treat as special code' }).click();
      const field = page.getByLabel('Meaning', { exact: true }).last();
      // The new one, which nobody has named yet.
      await expect(field).toHaveValue('');
      await field.fill(meaning);
      await field.blur();
      await expect(field).toHaveValue(meaning);
    }
  }
  await open('age_band');
  await page.getByLabel('Protected attribute').check();
  await pick(page, page, 'Role', 'not used');
  await page.getByLabel('Why it is not used').fill('Protected: kept for fairness checks.');
  await page.getByLabel('Why it is not used').blur();
  await expect(row('age_band')).toContainText('not used, protected');
  for (const [column, role] of [
    ['outcome_12m', 'outcome'],
    ['decision', 'decision'],
    ['applied_on', 'application date'],
    ['application_id', 'identifier'],
    ['sex', 'not used, protected'],
  ])
    await expect(row(column)).toContainText(role);
  await expect(row('card_utilisation')).not.toContainText('looks like');

  await page.getByRole('link', { name: 'Outcome and partition', exact: true }).click();
  const mean = async (value: string, meaning: string): Promise<void> => {
    await page.getByRole('radiogroup', { name: `${value} means` }).getByRole('radio', { name: meaning }).check();
  };
  await mean('good', 'Good');
  await mean('bad', 'Bad');
  await mean('indeterminate', 'Indeterminate');
  await page.getByRole('checkbox', { name: /^declined/ }).check();
  await page.getByRole('button', { name: 'Add an exclusion' }).click();
  const exclusions = page.getByRole('region', { name: 'Exclusions' });
  await exclusions.getByLabel('Reason').fill('Loans to staff, granted on staff terms');
  await exclusions.getByLabel('Reason').blur();
  await pick(exclusions, page, 'Column', 'channel');
  await pick(exclusions, page, 'Test', 'is one of');
  await exclusions.getByLabel('Values, parted by commas').fill('staff');
  await exclusions.getByLabel('Values, parted by commas').blur();
  await page.getByRole('checkbox', { name: 'Out-of-time by applied_on' }).check();
  await page.getByLabel('From, included').fill('2025-01-01');
  await page.getByLabel('From, included').blur();
  await page.getByLabel('Seed', { exact: true }).fill('7');
  await page.getByLabel('Seed', { exact: true }).blur();
  const confirm = page.getByRole('button', { name: 'Confirm the definition' });
  await expect(confirm).toBeEnabled({ timeout: 60_000 });
  await confirm.click();
  const confirmed = page.getByRole('region', { name: 'Confirmed definition' });
  await expect(confirmed).toBeVisible({ timeout: 60_000 });
  // The waterfall reconciles: 24,000 rows, of which the staff loans and the declined leave.
  await expect(confirmed).toContainText('24\u202F000');
});

test('classes the characteristics and moves a cut by keyboard, with its reason', async ({ page, signInAs }) => {
  await signInAs('modeller');
  await openModel(page);
  await toStep(page, 'Binning');
  await page.getByRole('button', { name: 'Class the characteristics' }).click();
  await expect(page).toHaveURL(/\/binning\/[0-9a-f-]{36}/, { timeout: 120_000 });
  const list = page.getByRole('region', { name: 'Characteristics' });
  await expect(list.getByRole('link', { name: 'card_utilisation' })).toBeVisible();
  await expect(list.getByRole('link', { name: 'age_band' })).toHaveCount(0);
  await list.getByRole('link', { name: 'card_utilisation' }).click();

  const cut = page.getByRole('slider', { name: /^Cut 2 of/ });
  const before = Number(await cut.getAttribute('aria-valuenow'));
  await cut.focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(async () => Number(await cut.getAttribute('aria-valuenow'))).toBeGreaterThan(before);
  const edits = page.getByRole('region', { name: 'Edits by hand' });
  await edits.getByRole('combobox', { name: 'Not explained yet' }).focus();
  await page.keyboard.press('Enter');
  for (const key of ['Home', 'ArrowDown', 'ArrowDown', 'ArrowDown']) await page.keyboard.press(key);
  await page.keyboard.press('Enter');
  await expect(edits.getByRole('combobox', { name: 'Reason' })).toHaveText('Limit used in policy');
  await edits.getByLabel('More on it (optional)').fill('The limit that underwriters work with');
  await edits.getByLabel('More on it (optional)').blur();
  await expect(page.getByText(/^Saved /)).toBeVisible({ timeout: 20_000 });
});

test('fits a lasso and a ridge, and chooses the penalty by keyboard', async ({ page, signInAs }) => {
  await signInAs('modeller');
  await openModel(page);
  const fit = async (name: string, penalty: RegExp, folds: string): Promise<string> => {
    await toStep(page, 'Fit');
    await page.getByRole('link', { name: 'New fit' }).first().click();
    await page.getByLabel('Name', { exact: true }).fill(name);
    await page.getByRole('radio', { name: penalty }).check();
    await page.getByLabel('Folds', { exact: true }).fill(folds);
    await pick(page, page, 'Classing inside the folds', 'WOE from each training part');
    // Classed into the same bins as its neighbour: of two equal columns only the sum of their coefficients is determined.
    await page.getByLabel('How lines_in_arrears_24m enters the fit').selectOption('left out');
    await page.getByLabel('Why lines_in_arrears_24m is left out').fill('Says the same as worst_arrears_24m');
    await page.getByRole('button', { name: 'Fit the path' }).click();
    await expect(page).toHaveURL(/\/fit\/[0-9a-f-]{36}/);
    await expect(page.getByRole('progressbar', { name: 'Fitting the penalty path' })).toBeVisible();
    await expect(page.getByRole('slider', { name: 'Penalty' })).toBeVisible({ timeout: 180_000 });
    return /fit\/([0-9a-f-]{36})/.exec(page.url())![1];
  };
  await fit('Ridge, three folds', /^Ridge/, '3');
  fitId = await fit('Lasso, five folds', /^Lasso/, '5');

  const notch = page.getByRole('slider', { name: 'Penalty' });
  await notch.focus();
  await page.keyboard.press('Home');
  await expect(notch).toHaveAttribute('aria-valuenow', '1');
  await expect(page.getByText(/^0 of \d+ kept$/)).toBeVisible();
  await page.keyboard.press('ArrowRight');
  await expect(notch).toHaveAttribute('aria-valuenow', '2');
  await page.keyboard.press('1');
  await expect(notch).toHaveAttribute('aria-valuetext', /one standard error/);

  await page.getByRole('button', { name: 'Open the out-of-time figures' }).click();
  await page.getByRole('dialog').getByLabel('Why now').fill('The choice is about to be made');
  await page.getByRole('dialog').getByRole('button', { name: 'Open', exact: true }).click();
  await expect(page.getByRole('dialog')).toHaveCount(0);
  await page.getByRole('button', { name: 'Use this penalty' }).click();
  await page.getByRole('dialog').getByLabel(/^Why this penalty/).fill('The smaller model predicts as well within one standard error.');
  await page.getByRole('dialog').getByRole('button', { name: 'Use this penalty' }).click();
  await expect(page.getByRole('button', { name: 'This penalty is chosen' })).toBeDisabled();
  await expect(page.getByText(/one-standard-error rule, by Mara Modeller/)).toBeVisible();

  await page.getByRole('link', { name: 'All fits' }).click();
  await page.getByRole('checkbox', { name: 'Compare Lasso, five folds' }).check();
  await page.getByRole('checkbox', { name: 'Compare Ridge, three folds' }).check();
  await page.getByRole('link', { name: 'Compare 2 fits' }).click();
  const side = page.getByRole('region', { name: 'Fits side by side' });
  await expect(side.getByRole('columnheader')).toHaveText(['Lasso, five folds', 'Ridge, three folds'], { timeout: 30_000 });
});

test('scales it, scores one applicant, freezes, writes and submits', async ({ page, signInAs }) => {
  await signInAs('modeller');
  await openModel(page);
  await toStep(page, 'Scorecard');
  const reasons = page.getByRole('region', { name: 'Reasons' });
  await expect(reasons).toBeVisible({ timeout: 30_000 });
  const scorecard = (await (await page.request.get(`/api/fits/${fitId}/scorecard`)).json()) as Scorecard;
  expect(scorecard.characteristics.length).toBeGreaterThan(3);
  for (const { label, column } of scorecard.characteristics) await reasons.getByLabel(label, { exact: true }).fill(`Few points for ${column}`);
  await page.getByRole('spinbutton', { name: 'Cut-off' }).fill('470');
  await reasons.getByRole('button', { name: 'Save', exact: true }).click();
  await expect(page.getByRole('button', { name: 'Discard changes' })).toHaveCount(0);

  const applicant = page.locator('ts-applicant-form');
  const values: Readonly<Record<string, string>> = { card_utilisation: '35', enquiries_6m: '0', months_since_arrears: '-996', employment: 'permanent' };
  for (const { label, column } of scorecard.characteristics)
    if (values[column]) await applicant.getByLabel(label, { exact: true }).fill(values[column]);
  await applicant.getByRole('button', { name: 'Score', exact: true }).click();
  const scored = applicant.getByRole('region', { name: 'Points of this applicant' });
  await expect(scored.getByRole('row')).toHaveCount(scorecard.characteristics.length + 1);
  const points = await scored.locator('tbody tr').evaluateAll((rows) => rows.map((row) => Number((row.lastElementChild?.textContent ?? '').replace('\u2212', '-'))));
  const total = points.reduce((sum, value) => sum + value, scorecard.basePointsRounded);
  await expect(applicant.locator('.ts-figure-number')).toHaveText(String(total));
  await expect(applicant.getByText(/The law that applies/)).toBeVisible();

  await page.getByRole('button', { name: 'Freeze as a version' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Freeze', exact: true }).click();
  await expect(page).toHaveURL(/\/version\/[0-9a-f-]{36}$/, { timeout: 120_000 });
  versionId = page.url().split('/').at(-1)!;
  await expect(page.getByRole('button', { name: 'Submit for validation' })).toBeDisabled();
  for (const [section, text] of Object.entries(texts)) await page.getByLabel(new RegExp(`^${section}`)).fill(text);
  await page.getByRole('button', { name: 'Save texts' }).click();
  await expect(page.getByText(/^Saved .* by Mara Modeller/)).toBeVisible();
  await page.getByRole('button', { name: 'Submit for validation' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Submit', exact: true }).click();
  await expect(page.getByText('Submitted', { exact: true }).first()).toBeVisible();
});

test('a validator replicates from the raw file, studies stability and concludes', async ({ page, signInAs }) => {
  await signInAs('validator');
  await page.getByRole('navigation', { name: 'Places' }).getByRole('link', { name: 'Reviews' }).click();
  await page.locator(`a[href="/models/${modelId}/version/${versionId}"]`).click();
  await page.getByRole('button', { name: 'Take into validation' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Take it' }).click();
  await page.getByRole('link', { name: 'Tests' }).click();

  const replication = page.getByRole('region', { name: 'Replication' });
  await expect(replication.getByText('One half only')).toBeVisible();
  await replication.getByRole('button', { name: 'Replicate, independent solver' }).click();
  await expect(replication.getByRole('heading', { name: 'The two halves' })).toBeVisible({ timeout: 180_000 });
  await page.getByLabel('Resamples').fill('20');
  await page.getByRole('button', { name: 'Study stability' }).click();
  await expect(page.getByRole('button', { name: 'Study again' })).toBeVisible({ timeout: 180_000 });
  const work = (await (await page.request.get(`/api/versions/${versionId}/validation`)).json()) as ValidationWork;
  expect(work.replications).toHaveLength(1);
  expect(work.replications[0], JSON.stringify(work.replications[0].rows.filter(({ meets }) => !meets))).toMatchObject({
    method: 'independent',
    matches: true,
    differing: 0,
    scoresEqual: true,
  });
  expect(work.stability[0].resamples).toBe(20);

  await page.getByRole('link', { name: 'To the signature' }).click();
  await page.getByRole('button', { name: 'Conclude and sign' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByRole('radio', { name: 'Fit with conditions' }).check();
  await dialog.getByLabel('Conditions, one a line').fill('Review after two quarters of monitoring');
  await dialog.getByLabel('Opinion and scope').fill('Replicated by another solver; separates and is calibrated on hold-out rows.');
  await dialog.getByRole('button', { name: 'Sign', exact: true }).click();
  await expect(page.getByText('Concluded')).toBeVisible();
});

test('compliance makes the document, whose text holds the API’s numbers, and accepts', async ({ page, signInAs }) => {
  await signInAs('compliance');
  await page.goto(`/models/${modelId}/documentation/${versionId}`);
  await page.getByRole('button', { name: 'Make the document' }).click();
  const row = page.getByRole('region', { name: 'Documents of this version' }).getByRole('row').nth(1);
  await expect(row).toBeVisible({ timeout: 120_000 });
  const [download] = await Promise.all([page.waitForEvent('download'), row.getByRole('link', { name: /^Download / }).click()]);
  expect(download.suggestedFilename()).toMatch(/^M-\d+-version-1-edition-1\.pdf$/);
  const path = await download.path();
  const sha256 = createHash('sha256').update(readFileSync(path)).digest('hex');
  await expect(row).toContainText(sha256);

  const read = async <T>(address: string): Promise<T> => (await (await page.request.get(address)).json()) as T;
  const version = await read<Version>(`/api/versions/${versionId}`);
  const result = await read<Result>(`/api/versions/${versionId}/result`);
  const work = await read<ValidationWork>(`/api/versions/${versionId}/validation`);
  const text = execFileSync('pdftotext', ['-layout', path, '-'], { encoding: 'utf8', maxBuffer: 1 << 26 });
  const dense = text.replace(/\s+/g, '');
  expect(dense).toContain(version.fingerprint);
  const { development, holdOut, outOfTime } = result.metrics;
  const aucs = [development, holdOut, outOfTime].map((metrics) => String(metrics?.auc.toFixed(3)));
  expect(text).toMatch(new RegExp(`AUC +${aucs.join(' +')}`));
  for (const { lower, upper } of work.performance) {
    expect(text).toContain(lower!.toFixed(3));
    expect(text).toContain(upper!.toFixed(3));
  }
  const kept = result.characteristics.filter(({ coefficient }) => coefficient !== null && coefficient !== 0);
  expect(kept.length).toBeGreaterThan(3);
  for (const { column, coefficient } of kept) {
    const printed = coefficient!.toFixed(6).replace('-', '\u2212');
    expect(text).toMatch(new RegExp(`^ *${column} +${printed} `, 'm'));
  }
  expect(text).toContain('Review after two quarters of monitoring');
  expect(dense).toContain('24000');

  await page.getByRole('link', { name: 'Version', exact: true }).click();
  await page.getByRole('button', { name: 'Accept and sign' }).click();
  await page.getByRole('dialog').getByLabel('What is accepted').fill('The documentation in its first edition.');
  await page.getByRole('dialog').getByRole('button', { name: 'Sign', exact: true }).click();
  await expect(page.getByText('Approved with conditions', { exact: true }).first()).toBeVisible();
});
