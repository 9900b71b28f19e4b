import { z } from 'zod';
import { modelAbilities } from './abilities';

/** States a model can show: those of its leading version (governance: life of a version), or "In development" while there is none. */
export const modelStates = [
  'In development',
  'Submitted',
  'In validation',
  'Approved',
  'Approved with conditions',
  'Rejected',
  'In use',
  'Retired',
] as const;
export const ModelState = z.enum(modelStates);
export type ModelState = z.infer<typeof ModelState>;

/** Tier 1 is the one with the most at stake. What each tier asks for is lender policy. */
export const MaterialityTier = z.union([z.literal(1), z.literal(2), z.literal(3)]);
export type MaterialityTier = z.infer<typeof MaterialityTier>;

const line = (most: number) => z.string().trim().min(1, 'Fill this in').max(most, `Use at most ${most} characters`);
const text = (most: number) => z.string().trim().max(most, `Use at most ${most} characters`);

/** What people write about a model. */
export const ModelFields = z.strictObject({
  name: line(120),
  purpose: line(2000),
  product: line(120),
  population: line(1000),
  jurisdiction: line(120),
  /** The accountable owner as the lender names them: a person or a function. */
  owner: line(120),
  materialityTier: MaterialityTier,
  intendedUse: text(4000),
  prohibitedUse: text(4000),
});
export type ModelFields = z.infer<typeof ModelFields>;

export const NewModel = ModelFields.extend({ intendedUse: text(4000).default(''), prohibitedUse: text(4000).default('') });
export type NewModel = z.input<typeof NewModel>;

/** Only what is sent changes. */
export const ModelEdit = ModelFields.partial().refine((edit) => Object.keys(edit).length > 0, 'Nothing to change');
export type ModelEdit = z.infer<typeof ModelEdit>;

export const ModelMember = z.object({ personId: z.uuid(), name: z.string(), email: z.string(), addedAt: z.string() });
export type ModelMember = z.infer<typeof ModelMember>;

export const Model = z
  .object({
    id: z.uuid(),
    /** Given once by the inventory and never again: "M-0001". */
    inventoryNumber: z.string(),
    ...ModelFields.shape,
    state: ModelState,
    members: z.array(ModelMember),
    createdAt: z.string(),
    createdBy: z.string(),
    updatedAt: z.string(),
    /** Counts edits; answers carry it as the ETag that an edit sends back as If-Match. */
    revision: z.int(),
    abilities: z.array(z.enum(modelAbilities)),
  })
  .meta({ id: 'Model' });
export type Model = z.infer<typeof Model>;

export const ModelSummary = z
  .object({
    id: z.uuid(),
    inventoryNumber: z.string(),
    name: z.string(),
    product: z.string(),
    population: z.string(),
    jurisdiction: z.string(),
    owner: z.string(),
    materialityTier: MaterialityTier,
    state: ModelState,
    /** Names of the modellers, in alphabetical order. */
    members: z.array(z.string()),
    updatedAt: z.string(),
  })
  .meta({ id: 'ModelSummary' });
export type ModelSummary = z.infer<typeof ModelSummary>;

export const ModelQuery = z.strictObject({ search: z.string().trim().max(120).optional(), state: ModelState.optional() });
export const ModelList = z.object({ models: z.array(ModelSummary) }).meta({ id: 'ModelList' });
export type ModelList = z.infer<typeof ModelList>;

export const ModelParams = z.strictObject({ modelId: z.uuid() });
export const MemberParams = z.strictObject({ modelId: z.uuid(), personId: z.uuid() });
export const NewMember = z.strictObject({ personId: z.uuid() });

/** Modellers who are not members yet. */
export const MemberCandidates = z
  .object({ people: z.array(z.object({ id: z.uuid(), name: z.string(), email: z.string() })) })
  .meta({ id: 'MemberCandidates' });
export type MemberCandidates = z.infer<typeof MemberCandidates>;

/** The notches of the work's rule, in order. */
export const workSteps = ['sample', 'binning', 'fit', 'scorecard', 'version', 'validation', 'documentation'] as const;
export type WorkStepName = (typeof workSteps)[number];
/** done: behind the work; current: being worked on; decision: something waits for a person; ahead: not reached. */
export const workStepStates = ['done', 'current', 'decision', 'ahead'] as const;
export type WorkStepState = (typeof workStepStates)[number];

export const WorkStep = z
  .object({
    step: z.enum(workSteps),
    state: z.enum(workStepStates),
    /** One short caption: what is there, or what waits. */
    caption: z.string(),
    /** Where the step leads in the client. */
    path: z.string(),
  })
  .meta({ id: 'WorkStep' });
export type WorkStep = z.infer<typeof WorkStep>;
export const ModelWork = z.object({ steps: z.array(WorkStep) }).meta({ id: 'ModelWork' });
export type ModelWork = z.infer<typeof ModelWork>;
