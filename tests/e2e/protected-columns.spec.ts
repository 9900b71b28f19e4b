import type { Page } from '@playwright/test';
import { applicantsWithRisk } from '../support/binned';
import { defineSample, enterEmptyModel } from '../support/demo-places';
import { expectAccessible, expectNoOverflow, narrow, present, wide } from '../support/page-inspection';
import { expect, test } from '../support/rooms';

/** A protected characteristic in the browser: what its modeller can do about it, and what compliance can. */

/** A confirmed definition in which gender is a protected characteristic, made in the name of the modeller on whose page this is. */
async function define(page: Page, modelId: string): Promise<string> {
  const { sampleId } = await defineSample(page, modelId, applicantsWithRisk(600), (content) => ({
    ...content,
    columns: content.columns.map((column) => {
      if (column.column === 'gender') return { ...column, role: 'characteristic', protected: true, citation: 'Section 1, as the modeller reads it' };
      if (column.column === 'utilisation') return { ...column, role: 'characteristic', special: [{ label: 'no bureau record', values: [-999] }] };
      return ['age', 'home'].includes(column.column) ? { ...column, role: 'characteristic', reason: 'as an example' } : column;
    }),
    partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null },
  }));
  return `/models/${modelId}/sample/${sampleId}`;
}

test('a protected column is proposed by its modeller, permitted and withdrawn by compliance', async ({ roomOf }) => {
  test.setTimeout(180_000);
  const modeller = (await roomOf('modeller')).page;
  const { id: modelId } = await enterEmptyModel(modeller, `Overdrafts, application scorecard ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`);
  const address = await define(modeller, modelId);

  await modeller.goto(`${address}/columns?column=gender`);
  await expect(modeller.getByLabel('Citation you propose to compliance')).toHaveValue('Section 1, as the modeller reads it');
  await modeller.goto(`${address}/definition`);
  const list = (page: Page) => page.getByRole('list', { name: 'Protected columns' });
  await expect(list(modeller)).toContainText('Barred from every binning and fit until somebody with the role of compliance permits it, with a citation.');
  await expect(list(modeller)).toContainText('A proposal permits nothing.');
  await expect(list(modeller).getByRole('button')).toHaveCount(0);

  const compliance = (await roomOf('compliance')).page;
  await compliance.goto(`${address}/definition`);
  await list(compliance).getByRole('button', { name: 'Permit gender' }).click();
  const dialog = compliance.getByRole('dialog', { name: 'Permit gender?' });
  await expect(dialog).toContainText('The modeller proposes “Section 1, as the modeller reads it”.');
  await expect(dialog.getByLabel('Citation that permits it')).toHaveValue('');
  await dialog.getByRole('button', { name: 'Permit', exact: true }).click();
  await expect(dialog.getByText('Cite the legal basis that permits it.')).toBeVisible();
  await expectAccessible(compliance, 'all', 'the dialog');
  await dialog.getByLabel('Citation that permits it').fill('Section 14 of the invented Saltmarsh Lending Act');
  await dialog.getByLabel('Why it applies').fill('Counsel confirmed it for this product.');
  await dialog.getByRole('button', { name: 'Permit', exact: true }).click();
  await expect(dialog).toHaveCount(0);
  await expect(list(compliance)).toContainText('with “Section 14 of the invented Saltmarsh Lending Act”. Counsel confirmed it for this product.');

  for (const size of [wide, narrow])
    for (const scheme of ['light', 'dark'] as const) {
      await present(compliance, size, scheme);
      await expectAccessible(compliance, 'all', `${size.width} ${scheme}`);
      await expectNoOverflow(compliance, `${size.width} ${scheme}`);
    }
  await present(compliance, wide, 'light');

  await list(compliance).getByRole('button', { name: 'Withdraw the permission of gender' }).click();
  const withdrawing = compliance.getByRole('dialog', { name: 'Withdraw the permission of gender?' });
  await withdrawing.getByLabel('Why it is withdrawn').fill('Counsel took it back for this product.');
  await withdrawing.getByRole('button', { name: 'Withdraw', exact: true }).click();
  await expect(list(compliance)).toContainText('Counsel took it back for this product.');
  await expect(list(compliance).getByRole('button', { name: 'Permit gender' })).toBeVisible();
  await modeller.reload();
  await expect(list(modeller)).toContainText('barred');
  await expect(list(modeller)).toContainText('“Section 14 of the invented Saltmarsh Lending Act” withdrawn by');
});
