import { execFileSync } from 'node:child_process';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Locator, Page } from '@playwright/test';
import { clientRoutes } from '../support/client-routes';
import { type DemoPlaces, bringIn, enterEmptyModel, inviteByMail } from '../support/demo-places';
import { expectAccessible, expectLoaded, expectNoOverflow, keepPicture, narrow, openAddress, present, wide } from '../support/page-inspection';
import { type Room, expect, test } from '../support/rooms';

/**
 * Every page of the client on the demo installation, as somebody who may see it, at 1280 and 390 px, light and dark: its heading and its data
 * are there, axe finds nothing, nothing is wider than the window, nothing goes wrong. With
 * `TALLYSTONE_PICTURES=1` the pictures are kept under `test-results/pages`, to be looked at: they take longer than all the rest.
 */
interface Visit {
  /** The route this is a visit to, as the route files write it. */
  readonly route: string;
  /** Which of several visits to a route this is. */
  readonly state?: string;
  readonly as: string;
  readonly at: (places: DemoPlaces, roomOf: (who: string) => Promise<Room>) => string | Promise<string>;
  readonly heading: string | RegExp;
  /** The name of the model whose frame the page stands in. */
  readonly model?: (places: DemoPlaces) => string;
  /** Something that is there only once the page's data are. */
  readonly loaded: (page: Page) => Locator;
  /** What this person does on the page before it is looked at. */
  readonly first?: (page: Page) => Promise<void>;
}

const table = (name: string) => (page: Page) => page.getByRole('region', { name, exact: true }).locator('tbody tr');
const region = (name: string) => (page: Page) => page.getByRole('region', { name, exact: true });
const button = (name: string) => (page: Page) => page.getByRole('button', { name, exact: true });
const words = (text: string) => (page: Page) => page.getByText(text);
const empty = (title: string) => (page: Page) => page.locator('ts-empty', { hasText: title });

type Inside = Omit<Visit, 'as' | 'at' | 'model' | 'route'> & { readonly at?: (places: DemoPlaces) => string; readonly as?: string };
/** A page of the demo's model, as its modeller unless somebody else is named; without ids in it, the route is the address. */
const inside = (path: string, visit: Inside): Visit => ({
  as: 'modeller',
  ...visit,
  route: `/models/:modelId${path}`,
  at: (places) => `/models/${places.modelId}${visit.at ? visit.at(places) : path}`,
  model: ({ modelName }) => modelName,
});

const smallFile = fileURLToPath(new URL('../../data-demo/intake/ok/plain.csv', import.meta.url));
/** Each process that runs tests has one of its own: what one brings in is not there for another. */
const emptyModel = `Credit cards, behavioural scorecard ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`;
const outdated = `Store cards, application scorecard ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`;
let emptyModelId: string | undefined;
/** A page of a model that nobody has worked on yet. */
const untouched = (path: string, heading: string, loaded: Visit['loaded']): Visit => ({
  route: `/models/:modelId${path}`,
  state: 'untouched',
  as: 'modeller',
  at: async (_places, roomOf) => `/models/${(emptyModelId ??= (await enterEmptyModel((await roomOf('modeller')).page, emptyModel)).id)}${path}`,
  heading,
  model: () => emptyModel,
  loaded,
});

const lasso = ({ fits }: DemoPlaces): string => fits['Lasso, ten folds'];
const ridge = ({ fits }: DemoPlaces): string => fits['Ridge, ten folds'];

const visits: readonly Visit[] = [
  { route: '/sign-in', as: 'nobody', at: () => '/sign-in', heading: 'Sign in', loaded: button('Sign in') },
  { route: '/set-up', as: 'nobody', at: () => '/set-up', heading: 'Set Tallystone up', loaded: words('The first account exists already') },
  {
    route: '/invitation/:token',
    as: 'nobody',
    at: async (_places, roomOf) => `/invitation/${await inviteByMail((await roomOf('admin')).page)}`,
    heading: 'Your invitation',
    loaded: button('Open my account'),
  },
  { route: '/unreachable', as: 'nobody', at: () => '/unreachable', heading: 'The server cannot be reached', loaded: button('Try again') },
  { route: '/models/new', as: 'modeller', at: () => '/models/new', heading: 'New model', loaded: button('Enter the model') },
  inside('', { heading: 'About this model', loaded: region('Modellers') }),
  inside('/kept-samples', { as: 'admin', heading: 'Kept of applicants', loaded: table('Samples kept') }),
  {
    route: '/models/:modelId/kept-samples',
    state: 'erased',
    as: 'admin',
    async at(_places, roomOf) {
      const { page } = await roomOf('modeller');
      const { id } = await enterEmptyModel(page, outdated);
      await bringIn(page, id, 'applicants-2019.csv', 'a,bad\n1,0\n2,1\n');
      return `/models/${id}/kept-samples`;
    },
    heading: 'Kept of applicants',
    model: () => outdated,
    async first(page) {
      await page.getByRole('button', { name: 'Erase the rows of applicants-2019.csv' }).click();
      const dialog = page.getByRole('dialog', { name: 'Erase the rows of sample 1?' });
      await dialog.getByRole('button', { name: 'Erase the rows' }).click();
      await expect(dialog.getByText('Type applicants-2019.csv: erasing cannot be undone.')).toBeVisible();
      await expectAccessible(page, 'all', 'the dialog');
      await dialog.getByLabel('Why they are erased').fill('Retention of seven years has ended.');
      await dialog.getByLabel('Name of the file, typed again').fill('applicants-2019.csv');
      await dialog.getByRole('button', { name: 'Erase the rows' }).click();
      await expect(dialog).toHaveCount(0);
    },
    loaded: words('No row of any applicant is kept in this model; the rows of one sample were erased.'),
  },
  inside('/sample', { heading: 'Sample', loaded: table('Samples') }),
  inside('/sample/:sampleId', { at: ({ sampleId }) => `/sample/${sampleId}`, heading: 'Definition', loaded: region('Confirmed definition') }),
  inside('/sample/:sampleId/reading', { at: ({ sampleId }) => `/sample/${sampleId}/reading`, heading: 'Reading choices', loaded: words('a confirmed definition rests on them') }),
  inside('/sample/:sampleId/columns', { at: ({ sampleId }) => `/sample/${sampleId}/columns`, heading: 'Columns', loaded: table('Columns of the sample') }),
  inside('/sample/:sampleId/definition', { at: ({ sampleId }) => `/sample/${sampleId}/definition`, heading: 'Definition', loaded: table('Partitions') }),
  inside('/sample/:sampleId/quality', { at: ({ sampleId }) => `/sample/${sampleId}/quality`, heading: 'Data quality', loaded: (page) => page.getByRole('heading', { name: 'Stability by month' }) }),
  inside('/sample/:sampleId/definition', {
    state: 'draft',
    at: ({ sampleId }) => `/sample/${sampleId}/definition`,
    heading: 'Definition',
    first: (page) => page.getByRole('button', { name: 'Work on another definition' }).click(),
    loaded: (page) => page.getByRole('button', { name: 'Confirm the definition', disabled: false }),
  }),
  inside('/binning', { heading: 'Binning', loaded: table('Binnings of this model') }),
  inside('/binning/:binningId', { at: ({ binningId }) => `/binning/${binningId}`, heading: 'First binning', loaded: table('Characteristics') }),
  inside('/binning/:binningId/history', { at: ({ binningId }) => `/binning/${binningId}/history`, heading: 'History of edits', loaded: table('Edits by hand') }),
  inside('/binning/:binningId/correlations', { at: ({ binningId }) => `/binning/${binningId}/correlations`, heading: 'Correlations', loaded: table('Groups and variance inflation') }),
  inside('/binning/:binningId/:characteristicId', {
    at: ({ binningId, characteristics }) => `/binning/${binningId}/${characteristics['card_utilisation']}`,
    heading: 'card_utilisation',
    loaded: region('Edits by hand'),
  }),
  inside('/binning/:binningId/:characteristicId', {
    state: 'categories',
    at: ({ binningId, characteristics }) => `/binning/${binningId}/${characteristics['employment']}`,
    heading: 'employment',
    loaded: region('Edits by hand'),
  }),
  inside('/binning/:binningId/:characteristicId', {
    state: 'below zero',
    at: ({ binningId, characteristics }) => `/binning/${binningId}/${characteristics['average_balance_6m']}`,
    heading: 'average_balance_6m',
    loaded: region('Edits by hand'),
  }),
  inside('/fit', { heading: 'Fits', loaded: table('Fits of this model') }),
  inside('/fit/new', { heading: 'New fit', loaded: (page) => page.getByLabel(/^How .* enters the fit$/) }),
  inside('/fit/:fitId', { at: (places) => `/fit/${lasso(places)}`, heading: 'Lasso, ten folds', loaded: (page) => page.getByRole('slider', { name: 'Penalty' }) }),
  inside('/fit/:fitId', {
    state: 'ridge',
    at: (places) => `/fit/${ridge(places)}`,
    heading: 'Ridge, ten folds',
    loaded: (page) => page.getByRole('slider', { name: 'Penalty' }),
  }),
  inside('/comparison', {
    at: (places) => `/comparison?fits=${lasso(places)},${ridge(places)}`,
    heading: 'Comparison',
    loaded: table('Coefficients and points range by fit'),
  }),
  inside('/scorecard', { heading: 'Scorecard', loaded: table('Rows, bads and bad rate by band') }),
  inside('/version', { heading: 'Versions', loaded: table('Versions of this model') }),
  inside('/version/:versionId', { at: ({ versionId }) => `/version/${versionId}`, heading: 'Version 1', loaded: button('Save texts') }),
  inside('/validation', { heading: 'Validation', loaded: table('Versions to validate') }),
  inside('/validation/:versionId', { state: 'one half', at: ({ versionId }) => `/validation/${versionId}`, heading: /^Validation/, loaded: table('Evidence of this version') }),
  inside('/documentation', { heading: 'Documentation', loaded: table('Versions to document') }),
  inside('/documentation/:versionId', { at: ({ versionId }) => `/documentation/${versionId}`, heading: /^Documentation/, loaded: table('Documents of this version') }),
  untouched('/sample', 'Sample', (page) => page.getByLabel('CSV file')),
  untouched('/binning', 'Binning', empty('No confirmed sample yet')),
  untouched('/fit', 'Fits', empty('No fit yet')),
  untouched('/fit/new', 'New fit', empty('No binning to fit on')),
  untouched('/comparison', 'Comparison', empty('Nothing to compare yet')),
  untouched('/scorecard', 'Scorecard', empty('No scorecard yet')),
  untouched('/version', 'Versions', empty('No version yet')),
  untouched('/validation', 'Validation', empty('Nothing to validate yet')),
  untouched('/documentation', 'Documentation', empty('Nothing to document yet')),
  {
    ...untouched('/sample', 'Reading choices', table('First rows of the file')),
    route: '/models/:modelId/sample/:sampleId/reading',
    state: 'brought in',
    first: (page) => page.getByLabel('CSV file').setInputFiles(smallFile),
  },
  { route: '/**', as: 'modeller', at: () => '/there/is/nothing', heading: 'Nothing at this address', loaded: words('The page does not exist') },
];

/** The places of the top band, in their order, and who is offered each. */
const bands: Readonly<Record<string, readonly string[]>> = {
  modeller: ['Models', 'Reviews', 'Documents', 'Record'],
  validator: ['Models', 'Reviews', 'Documents', 'Record'],
  compliance: ['Models', 'Reviews', 'Documents', 'Record', 'People'],
  admin: ['Models', 'Record', 'People'],
  auditor: ['Models', 'Reviews', 'Documents', 'Record', 'People'],
};
const places: Readonly<Record<string, Pick<Visit, 'as' | 'heading' | 'loaded' | 'route'>>> = {
  // Each as the role that is offered most on it.
  Models: { route: '/models', as: 'modeller', heading: 'Models', loaded: table('Models') },
  Reviews: { route: '/reviews', as: 'validator', heading: 'Reviews', loaded: table('Versions under review') },
  Documents: { route: '/documents', as: 'compliance', heading: 'Documents', loaded: table('Documents') },
  Record: { route: '/record', as: 'auditor', heading: 'Record of actions', loaded: (page) => page.locator('.ledger li') },
  People: { route: '/people', as: 'admin', heading: 'People', loaded: table('People') },
  Account: { route: '/account', as: 'modeller', heading: 'Account', loaded: words('this one') },
};

const allVisits: readonly Visit[] = [
  ...visits,
  ...Object.values(places).map((place) => ({ at: () => place.route, ...place })),
  inside('/validation/:versionId', {
    state: 'two halves',
    as: 'validator',
    at: ({ versionId }) => `/validation/${versionId}`,
    heading: /^Validation/,
    loaded: table('Evidence of this version'),
    async first(page) {
      const halves = page.getByRole('heading', { name: 'The two halves' });
      await page.getByRole('button', { name: 'Replicate, independent solver' }).click();
      await expect(halves).toBeVisible({ timeout: 120_000 });
      // The demo's version meets, down to the points of every bin.
      await expect(page.getByText(/^All [\d\u202F]+ numbers /)).toBeVisible();
      await page.getByRole('spinbutton', { name: 'Resamples' }).fill('50');
      await page.getByRole('button', { name: 'Study stability' }).click();
      await expect(page.getByRole('button', { name: 'Study again' })).toBeVisible({ timeout: 120_000 });
    },
  }),
];

test.describe.configure({ mode: 'parallel', timeout: 300_000 });

const pictures = process.env['TALLYSTONE_PICTURES'] === '1';

test('every page of the client is visited', () => {
  const visited = new Set(allVisits.map(({ route }) => route));
  const routes = clientRoutes().map(({ path }) => path);
  expect(routes.filter((route) => !visited.has(route)), 'pages without a visit').toEqual([]);
  expect([...visited].filter((route) => !routes.includes(route)), 'visits to no page').toEqual([]);
});

for (const [role, offered] of Object.entries(bands))
  test(`${role}: the band offers ${offered.join(', ')} and nothing else`, async ({ roomOf }) => {
    const { page, takeProblems } = await roomOf(role);
    await present(page, wide, 'light');
    await page.goto('/models');
    const links = page.getByRole('navigation', { name: 'Places' }).getByRole('link');
    await expect(links).toHaveText([...offered]);
    for (const name of offered) {
      const { heading, loaded } = places[name];
      await links.filter({ hasText: name }).click();
      await expectLoaded(page, { heading, model: null, loaded: loaded(page) });
      await expectNoOverflow(page, name);
    }
    for (const [name, { route }] of Object.entries(places)) {
      if (name === 'Account' || offered.includes(name)) continue;
      await openAddress(page, route);
      await expect(page.getByRole('heading', { level: 1 })).toHaveText('Nothing at this address');
    }
    expect(takeProblems()).toEqual([]);
  });

test('modeller: the cut-off has its notch in the scores from when it is stated', async ({ roomOf, demo }) => {
  const { page, takeProblems } = await roomOf('modeller');
  await present(page, wide, 'light');
  await page.goto(`/models/${demo.modelId}/scorecard`);
  const field = page.getByRole('spinbutton', { name: 'Cut-off' });
  const notch = page.getByRole('slider', { name: 'Cut-off' });
  await expect(field).toHaveValue('470');
  await expect(notch).toHaveAttribute('aria-valuenow', '470');
  await field.fill('');
  await expect(notch).toHaveCount(0);
  await field.fill('480');
  await expect(notch).toHaveAttribute('aria-valuetext', /^cut-off 480: approves [\d.]+\u202F%, bad rate [\d.]+\u202F%$/);
  await page.getByRole('button', { name: 'Discard changes' }).first().click();
  await expect(field).toHaveValue('470');
  expect(takeProblems()).toEqual([]);
});

test('modeller: the report of quality prints whole, its header on every sheet', async ({ roomOf, demo }) => {
  const { page, takeProblems } = await roomOf('modeller');
  await present(page, wide, 'light');
  await page.goto(`/models/${demo.modelId}/sample/${demo.sampleId}/quality`);
  await expect(page.getByRole('heading', { name: 'Stability by month' })).toBeVisible();
  const sheets = execFileSync('pdftotext', ['-layout', '-', '-'], { input: await page.pdf({ format: 'A4' }), encoding: 'utf8' }).split('\f');
  const tables = sheets.filter((sheet) => /(characteristic|outcome) +[\d.]+\s?%/.test(sheet));
  expect(tables.length).toBeGreaterThan(1);
  // The last column of the table is the first that a sheet which is too narrow would lose.
  for (const sheet of tables) expect(sheet).toMatch(/Column +Role +Missing .* Flags open/);
  // Thirty-six months lie on the sheet to the last one with a name.
  expect(sheets.join('')).toMatch(/2022.07 .* 2025.01/);
  expect(takeProblems()).toEqual([]);
});

for (const visit of allVisits)
  test(`${visit.as}: ${[visit.route, visit.state].filter(Boolean).join(', ')}`, async ({ roomOf, demo }, { project }) => {
    const { page, takeProblems } = await roomOf(visit.as);
    await present(page, wide, 'light');
    await openAddress(page, await visit.at(demo, roomOf));
    await visit.first?.(page);
    await expectLoaded(page, { heading: visit.heading, model: visit.model?.(demo) ?? null, loaded: visit.loaded(page) });

    const folder = join(project.outputDir, 'pages');
    const name = [visit.route.replaceAll(/[^a-zA-Z]+/g, '-').replaceAll(/^-|-$/g, '') || 'nowhere', visit.state?.replace(' ', '-'), visit.as].filter(Boolean).join('.');
    for (const [size, scheme, axe] of [[wide, 'light', 'all'], [wide, 'dark', 'colours'], [narrow, 'dark', null], [narrow, 'light', 'layout']] as const) {
      const where = `${size.width} px, ${scheme}`;
      await present(page, size, scheme);
      await expectNoOverflow(page, where);
      if (axe) await expectAccessible(page, axe, where);
      if (pictures) await keepPicture(page, folder, `${name}.${size.width}-${scheme}`);
    }
    expect(takeProblems(), 'errors, policy violations and failed requests').toEqual([]);
  });
