import { z } from 'zod';

const number = z.number();
const nullable = z.number().nullable();
const sha = z.string();

/** same code: the engine in a new process; independent: another solver that shares no code with it. Both read the stored raw file. */
export const replicationMethods = ['same code', 'independent'] as const;
export const ReplicationMethod = z.enum(replicationMethods);
export const NewReplication = z.strictObject({ method: ReplicationMethod });

/** One number of both halves. */
export const HalvesRow = z.object({
  /** Place in the result: "characteristics.age.coefficient". */
  place: z.string(),
  label: z.string(),
  modeller: nullable,
  validator: nullable,
  difference: nullable,
  /** |difference| allowed here. */
  tolerance: number,
  meets: z.boolean(),
});

export const PartitionAuc = z.object({
  partition: z.enum(['development', 'holdOut', 'outOfTime']),
  rows: z.int(),
  goods: number,
  bads: number,
  auc: number,
  standardError: nullable,
  lower: nullable,
  upper: nullable,
  ks: number,
  brier: number,
  calibrationInTheLarge: nullable,
  calibrationSlope: nullable,
  hosmerLemeshow: z.object({ statistic: nullable, groups: z.int(), degreesOfFreedom: z.int(), pValue: nullable }).nullable(),
});

const pairOfFits = { own: number, foreign: number };

/** What the independent replication adds: collinearity of the columns kept, and an unpenalised fit of them by a foreign library. */
export const Challenge = z.object({
  /** null = an exact combination of others. Above 5 is flagged (common practice). */
  varianceInflation: z.array(z.object({ column: z.string(), value: nullable })),
  conditionIndex: nullable,
  foreign: z.union([
    z.object({
      rows: z.int(),
      of: z.int(),
      intercept: z.object(pairOfFits),
      coefficients: z.array(z.object({ column: z.string(), ...pairOfFits })),
      largestDifference: number,
    }),
    z.object({ unavailable: z.string() }),
  ]),
});

export const Replication = z
  .object({
    evidenceId: z.uuid(),
    evidenceNumber: z.int(),
    method: ReplicationMethod,
    /** Every number compared meets its tolerance, and every integer score is equal. */
    matches: z.boolean(),
    compared: z.int(),
    differing: z.int(),
    largestDifference: number,
    /** Intercept, coefficients and points first; beyond those only what differs. */
    rows: z.array(HalvesRow),
    /** Rounded scores of every applicant with a known outcome, all partitions. */
    scoresCompared: z.int(),
    scoresEqual: z.boolean(),
    performance: z.array(PartitionAuc),
    challenge: Challenge.nullable(),
    dataSha256: sha,
    specificationSha256: sha,
    codeVersion: z.string(),
    seconds: number,
    by: z.string(),
    at: z.string(),
  })
  .meta({ id: 'Replication' });

export const StabilityRow = z.object({
  column: z.string(),
  label: z.string(),
  coefficient: number,
  /** Share of resamples in which it was kept. */
  selected: number,
  /** Of those in which it was kept: share with the sign of the version. */
  sameSign: nullable,
  lower: nullable,
  upper: nullable,
  /** By bin, against neutral (WOE 0): Factor x coefficient x WOE of the version, and its 2.5 % and 97.5 % percentiles over resamples, WOE held. */
  bins: z.array(z.object({ label: z.string(), points: number, lower: nullable, upper: nullable })),
});

export const NewStability = z.strictObject({
  resamples: z.int().min(20, 'At least 20 resamples').max(1000, 'At most 1000 resamples').default(200),
  seed: z.int().min(0).max(2147483647).default(1),
});

export const Stability = z
  .object({
    evidenceId: z.uuid(),
    evidenceNumber: z.int(),
    resamples: z.int(),
    seed: z.int(),
    lambda: number,
    rows: z.array(StabilityRow),
    /** Resamples whose fit did not converge; they count as drawn and are named. */
    notConverged: z.int(),
    by: z.string(),
    at: z.string(),
  })
  .meta({ id: 'Stability' });

export const evidenceKinds = ['version', 'sample', 'classing', 'fit', 'performance', 'replication', 'stability'] as const;
export const EvidenceKind = z.enum(evidenceKinds);
export const EvidenceSummary = z.object({
  id: z.uuid(),
  /** E-1, E-2 … within the version. */
  number: z.int(),
  kind: EvidenceKind,
  title: z.string(),
  sha256: sha,
  runId: z.uuid().nullable(),
  by: z.string(),
  at: z.string(),
});
export const EvidenceList = z.object({ evidence: z.array(EvidenceSummary) }).meta({ id: 'EvidenceList' });

export const ValidationWork = z
  .object({
    replications: z.array(Replication),
    stability: z.array(Stability),
    /** Runs under way. */
    runIds: z.array(z.uuid()),
    /** The modeller's half: performance of the version as frozen. Out-of-time only once opened. */
    performance: z.array(PartitionAuc),
    abilities: z.array(z.enum(['replicate', 'study-stability'])),
  })
  .meta({ id: 'ValidationWork' });

export const RunStarted = z.object({ runId: z.uuid() });
export const ofVersion = z.strictObject({ versionId: z.uuid() });

export type ReplicationMethod = z.infer<typeof ReplicationMethod>;
export type HalvesRow = z.infer<typeof HalvesRow>;
export type PartitionAuc = z.infer<typeof PartitionAuc>;
export type Challenge = z.infer<typeof Challenge>;
export type Replication = z.infer<typeof Replication>;
export type Stability = z.infer<typeof Stability>;
export type StabilityRow = z.infer<typeof StabilityRow>;
export type EvidenceKind = z.infer<typeof EvidenceKind>;
export type EvidenceSummary = z.infer<typeof EvidenceSummary>;
export type ValidationWork = z.infer<typeof ValidationWork>;
