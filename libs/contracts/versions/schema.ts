import { z } from 'zod';
import { versionAbilities, versionListAbilities } from './abilities';
import { ModelState } from '../models/schema';
import { Erasure } from '../samples/erasure';

const number = z.number();
const sha = z.string().regex(/^[0-9a-f]{64}$/);

/** Acts in the life of a version (governance: life of a version). */
export const versionActs = ['freeze', 'submit', 'withdraw', 'start', 'conclude', 'accept', 'return'] as const;
export const VersionAct = z.enum(versionActs);
export const conclusions = ['fit for use', 'fit with conditions', 'not fit'] as const;
export const Conclusion = z.enum(conclusions);

const Statement = z.string().trim().max(8000);

/** What a person does with a version. Concluding and accepting are signatures: the statement is signed with them. */
export const NewAct = z.discriminatedUnion('act', [
  z.strictObject({ act: z.literal('submit'), statement: Statement.default('') }),
  z.strictObject({ act: z.literal('withdraw'), statement: Statement.min(1, 'Say why it is withdrawn') }),
  z.strictObject({ act: z.literal('start'), statement: Statement.default('') }),
  z.strictObject({
    act: z.literal('conclude'),
    conclusion: Conclusion,
    statement: Statement.min(20, 'The opinion needs a sentence at least'),
    /** Required with "fit with conditions". */
    conditions: z.array(z.string().trim().min(1).max(2000)).max(50).default([]),
  }),
  z.strictObject({ act: z.literal('accept'), statement: Statement.min(1, 'Say what is accepted') }),
  z.strictObject({ act: z.literal('return'), statement: Statement.min(1, 'Say what the texts still need') }),
]);

export const ActEntry = z.object({
  id: z.uuid(),
  act: VersionAct,
  from: ModelState.nullable(),
  to: ModelState,
  conclusion: Conclusion.nullable(),
  conditions: z.array(z.string()),
  statement: z.string(),
  by: z.string(),
  byId: z.uuid(),
  role: z.enum(['modeller', 'validator', 'compliance']),
  at: z.string(),
});

/** One thing a gate asks for: whether it holds, and where to go when it does not. */
export const GateItem = z.object({
  code: z.string(),
  label: z.string(),
  holds: z.boolean(),
  /** What is missing, exactly. */
  detail: z.string(),
  /** Path in the client where it can be put right; null where nowhere. */
  path: z.string().nullable(),
});
export const Gate = z.object({ act: z.enum(['submit', 'conclude', 'accept']), open: z.boolean(), items: z.array(GateItem) });

/** Author's texts, by section of the document; open until the second signature. */
export const versionTextKeys = [
  'recommendation',
  'exclusionsRationale',
  'outcomeJustification',
  'sourcesSuitability',
  'penaltyReason',
  'businessSense',
  'performanceInterpretation',
  'signExceptions',
  'trendExceptions',
  'limitations',
  'monitoringPlan',
  'changeReasons',
] as const;
export const VersionTextKey = z.enum(versionTextKeys);
export const VersionTexts = z.partialRecord(VersionTextKey, z.string().max(20000));
export const TextsState = z.object({
  texts: VersionTexts,
  revision: z.int(),
  changedBy: z.string().nullable(),
  changedAt: z.string().nullable(),
  abilities: z.array(z.enum(['edit'])),
});

export const NewVersion = z.strictObject({ fitId: z.uuid(), note: Statement.default('') });

export const VersionSummary = z.object({
  id: z.uuid(),
  modelId: z.uuid(),
  modelName: z.string(),
  inventoryNumber: z.string(),
  number: z.int(),
  state: ModelState,
  /** In validation, concluded, waiting for compliance. */
  awaitingCompliance: z.boolean(),
  /** Returned to the modeller for texts. */
  returned: z.boolean(),
  fitId: z.uuid(),
  fitName: z.string(),
  kept: z.int(),
  /** SHA-256 over specification, data, code version and result. */
  fingerprint: sha,
  frozenBy: z.string(),
  frozenAt: z.string(),
  /** Who must do something next, in words; null where nobody. */
  waitingFor: z.string().nullable(),
  /** Set once the rows of its sample were erased: it is no longer replicable. */
  erased: Erasure.nullable(),
});

export const Version = VersionSummary.extend({
  specificationSha256: sha,
  resultSha256: sha,
  dataSha256: sha,
  codeVersion: z.string(),
  note: z.string(),
  intercept: number,
  lambda: number,
  acts: z.array(ActEntry),
  gates: z.array(Gate),
  abilities: z.array(z.enum(versionAbilities)),
  /** Why an act is not open to this person, by act: separation of duties and the like. */
  refusals: z.record(z.string(), z.string()),
}).meta({ id: 'Version' });

export const VersionList = z.object({ versions: z.array(VersionSummary), abilities: z.array(z.enum(versionListAbilities)) }).meta({ id: 'VersionList' });
export const ReviewList = z.object({ versions: z.array(VersionSummary) }).meta({ id: 'ReviewList' });
/** Result of the run "freeze version" (Run.result). */
export const FreezeResult = z.object({ versionId: z.uuid(), number: z.int() });
export const FreezeStarted = z.object({ runId: z.uuid() });

export const ofModel = z.strictObject({ modelId: z.uuid() });
export const ofVersion = z.strictObject({ versionId: z.uuid() });

export type NewAct = z.input<typeof NewAct>;
export type VersionAct = z.infer<typeof VersionAct>;
export type Conclusion = z.infer<typeof Conclusion>;
export type ActEntry = z.infer<typeof ActEntry>;
export type Gate = z.infer<typeof Gate>;
export type GateItem = z.infer<typeof GateItem>;
export type VersionTexts = z.infer<typeof VersionTexts>;
export type VersionTextKey = z.infer<typeof VersionTextKey>;
export type TextsState = z.infer<typeof TextsState>;
export type NewVersion = z.input<typeof NewVersion>;
export type VersionSummary = z.infer<typeof VersionSummary>;
export type Version = z.infer<typeof Version>;
export type VersionList = z.infer<typeof VersionList>;
export type ReviewList = z.infer<typeof ReviewList>;
