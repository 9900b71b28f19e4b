import type { HalvesRow, PartitionAuc, Replication, Stability, StabilityRow, ValidationWork } from '@tallystone/contracts/validation/schema';
import type { Version } from '@tallystone/contracts/versions/schema';

const sha = 'ab'.repeat(32);

/** An invented version, frozen and not submitted: the monitoring plan is missing. */
export const frozen: Version = {
  id: 'v1',
  modelId: 'm1',
  modelName: 'Personal loans',
  inventoryNumber: 'M-0001',
  number: 2,
  state: 'In development',
  awaitingCompliance: false,
  returned: false,
  fitId: 'f1',
  fitName: 'Lasso',
  kept: 8,
  fingerprint: sha,
  frozenBy: 'Marian',
  frozenAt: '2026-11-03T13:00:00Z',
  waitingFor: 'its modeller to submit',
  erased: null,
  specificationSha256: sha,
  resultSha256: sha,
  dataSha256: sha,
  codeVersion: '1.0.0',
  note: '',
  intercept: 1.2,
  lambda: 0.0095,
  acts: [
    { id: 'a1', act: 'freeze', from: null, to: 'In development', conclusion: null, conditions: [], statement: '', by: 'Marian', byId: 'p1', role: 'modeller', at: '2026-11-03T13:00:00Z' },
  ],
  gates: [
    {
      act: 'submit',
      open: false,
      items: [
        { code: 'exclusions-reconcile', label: 'Exclusions reconcile', holds: true, detail: 'All rows.', path: '/models/m1/sample/s1' },
        { code: 'reason-texts', label: 'A reason text for each', holds: false, detail: 'Without: age.', path: '/models/m1/scorecard?fit=f1' },
        { code: 'monitoring-plan', label: 'Monitoring plan present', holds: false, detail: 'Say what is watched.', path: '/models/m1/version/v1' },
      ],
    },
    { act: 'conclude', open: true, items: [{ code: 'replication-matches', label: 'A replication', holds: true, detail: '1 of 1.', path: null }] },
    { act: 'accept', open: true, items: [] },
  ],
  abilities: ['submit', 'write-texts'],
  refusals: {},
};

export const halvesRow = (place: string, change: Partial<HalvesRow> = {}): HalvesRow => ({
  place,
  label: place,
  modeller: 0.5,
  validator: 0.5,
  difference: 0,
  tolerance: 1e-6,
  meets: true,
  ...change,
});

export const replication = (change: Partial<Replication> = {}): Replication => ({
  evidenceId: `e${change.evidenceNumber ?? 6}`,
  evidenceNumber: 6,
  method: 'same code',
  matches: true,
  compared: 2155,
  differing: 0,
  largestDifference: 4e-13,
  rows: [
    halvesRow('intercept'),
    halvesRow('lambda'),
    halvesRow('characteristics[0].coefficient'),
    halvesRow('characteristics[0].bins[0].pointsRounded', { modeller: 12, validator: 12 }),
    halvesRow('characteristics[0].bins[1].pointsRounded', { modeller: 30, validator: 30 }),
  ],
  scoresCompared: 1000,
  scoresEqual: true,
  performance: [],
  challenge: null,
  dataSha256: sha,
  specificationSha256: sha,
  codeVersion: '1.0.0',
  seconds: 2,
  by: 'Vera',
  at: '2026-11-04T09:00:00Z',
  ...change,
});

export const partition = (name: PartitionAuc['partition'], auc: number, change: Partial<PartitionAuc> = {}): PartitionAuc => ({
  partition: name,
  rows: 700,
  goods: 490,
  bads: 210,
  auc,
  standardError: 0.02,
  lower: auc - 0.04,
  upper: auc + 0.04,
  ks: 0.5,
  brier: 0.15,
  calibrationInTheLarge: 0,
  calibrationSlope: 1.1,
  hosmerLemeshow: { statistic: 9.784, groups: 10, degreesOfFreedom: 8, pValue: 0.2804 },
  ...change,
});

export const stabilityRow = (column: string, change: Partial<StabilityRow> = {}): StabilityRow => ({
  column,
  label: column,
  coefficient: 0.6,
  selected: 1,
  sameSign: 1,
  lower: 0.4,
  upper: 0.8,
  bins: [{ label: 'low', points: -10, lower: -14, upper: -6 }],
  ...change,
});

export const stability = (rows: StabilityRow[]): Stability => ({
  evidenceId: 'e8',
  evidenceNumber: 8,
  resamples: 200,
  seed: 1,
  lambda: 0.0095,
  rows,
  notConverged: 0,
  by: 'Vera',
  at: '2026-11-04T09:00:00Z',
});

export const work = (change: Partial<ValidationWork> = {}): ValidationWork => ({
  replications: [],
  stability: [],
  runIds: [],
  performance: [partition('development', 0.84), partition('holdOut', 0.82)],
  abilities: ['replicate', 'study-stability'],
  ...change,
});
