import { z } from 'zod';
import type { BinnedCharacteristic } from '../specification/types';
import { OutOfTimeState } from '../out-of-time/schema';
import { Erasure } from '../samples/erasure';
import { binningAbilities, binningListAbilities } from './abilities';
import { AskedConstraints, Bins, Constraints, Fine } from './bins';
import { CorrelationStanding } from './correlations';
import { Edit, SentEdit } from './edits';

const finite = z.number();

export const binningStates = ['queued', 'classing', 'ready', 'failed', 'cancelled'] as const;
export const BinningState = z.enum(binningStates);
export type BinningState = z.infer<typeof BinningState>;

const name = z.string().trim().min(1, 'Give the binning a name').max(120);

export const NewBinning = z.strictObject({
  definitionId: z.uuid(),
  name,
  constraints: AskedConstraints.default(() => AskedConstraints.parse({})),
  /** An earlier binning of the model: characteristics of the same name keep its constraints, its edits where they make sense, and what it left out. */
  fromBinningId: z.uuid().nullable().default(null),
});
export type NewBinning = z.input<typeof NewBinning>;

/** What an earlier binning decided about a column that the new one does not class: nothing of it is carried over. */
export const NotHere = z.object({
  column: z.string(),
  /** Edits by hand in effect. */
  edits: z.int(),
  /** Why it was left out; null where it was included. */
  leftOut: z.string().nullable(),
  /** Why it is not classed here. */
  why: z.string(),
});
export type NotHere = z.infer<typeof NotHere>;

export const BinningSummary = z.object({
  id: z.uuid(),
  modelId: z.uuid(),
  /** 1, 2, 3 … within the model. */
  number: z.int(),
  name: z.string(),
  state: BinningState,
  runId: z.uuid().nullable(),
  definitionId: z.uuid(),
  sampleId: z.uuid(),
  /** Which definition of which sample, in words. */
  sample: z.string(),
  characteristics: z.int(),
  included: z.int(),
  /** Manual edits in effect, and how many of them have no reason yet. */
  edits: z.int(),
  editsWithoutReason: z.int(),
  /**
   * The earlier binning it started from, with how many of its edits were carried over and how many were not; of these, those of columns that are not
   * classed here.
   */
  from: z.object({ id: z.uuid(), name: z.string(), carried: z.int(), notCarried: z.int(), notHere: z.array(NotHere) }).nullable(),
  createdBy: z.string(),
  createdAt: z.string(),
  /** Set once the rows of its sample were erased: it is read and no longer changed. */
  erased: Erasure.nullable(),
});
export type BinningSummary = z.infer<typeof BinningSummary>;

export const BinningList = z
  .object({ binnings: z.array(BinningSummary), abilities: z.array(z.enum(binningListAbilities)) })
  .meta({ id: 'BinningList' });
export type BinningList = z.infer<typeof BinningList>;

export const Binning = BinningSummary.extend({
  constraints: AskedConstraints,
  outOfTime: OutOfTimeState,
  /** How often its rows were opened, under which definitions: "opened 2 times, 1 of them under an earlier definition"; null where never. */
  outOfTimeOpenings: z.string().nullable(),
  /** Columns with the role of a characteristic that no binning takes, with the reason. */
  barred: z.array(z.object({ column: z.string(), reason: z.string() })),
  /** Why the run ended without bins. */
  problem: z.string().nullable(),
  abilities: z.array(z.enum(binningAbilities)),
}).meta({ id: 'Binning' });
export type Binning = z.infer<typeof Binning>;

export const warningCodes = [
  'small-bin',
  'zero-cell',
  'not-monotone',
  'reversed-in-hold-out',
  'reversed-out-of-time',
  'unstable-in-hold-out',
  'unstable-out-of-time',
  'unstable-by-month',
  'high-information-value',
  'one-bin',
] as const;
export const Warning = z.object({
  code: z.enum(warningCodes),
  /** One sentence. */
  message: z.string(),
  /** Indices of the bins concerned. */
  bins: z.array(z.int()),
});
export type Warning = z.infer<typeof Warning>;

export const trends = ['rising', 'falling', 'one-peak', 'one-valley', 'mixed', 'none'] as const;

/** Usual reading of IV: under 0.02 none, to 0.1 weak, to 0.3 medium, above strong (lender policy; see the note beside the list). */
export const ivReadings = ['none', 'weak', 'medium', 'strong'] as const;

const summary = {
  id: z.uuid(),
  column: z.string(),
  kind: z.enum(['numeric', 'categorical']),
  /** Place in the sample's order of columns. */
  position: z.int(),
  included: z.boolean(),
  /** Why it is left out; empty while included. */
  leftOutReason: z.string(),
  informationValue: finite,
  /** 95 % interval of the information value by stratified bootstrap of the counts, bins held; null where there is no good or no bad. */
  informationValueLower: finite.nullable(),
  informationValueUpper: finite.nullable(),
  reading: z.enum(ivReadings),
  gini: finite,
  /** Of development rows. */
  missingShare: finite,
  /** Bins with a code of their own, special and missing ones included. */
  bins: z.int(),
  /** Of WOE along the value axis; "none" for a categorical characteristic or one bin. */
  trend: z.enum(trends),
  /** CSI of each later partition against development over the bins, out-of-time null while covered; and how far WOE moves from month to month. */
  stability: z.object({
    holdOut: finite.nullable(),
    outOfTime: finite.nullable(),
    /** Standard deviation of WOE between months of development and hold-out, beyond chance; null without an application date. */
    byMonth: finite.nullable(),
  }),
  /** Number of the group of characteristics that say the same, from 1; null alone, or before correlations are calculated. */
  group: z.int().nullable(),
  warnings: z.array(Warning),
  edits: z.int(),
  editsWithoutReason: z.int(),
  /** Edits of the earlier binning that make no sense here. */
  notCarried: z.int(),
  revision: z.int(),
};

export const CharacteristicSummary = z.object(summary);
export type CharacteristicSummary = z.infer<typeof CharacteristicSummary>;

export const CharacteristicList = z
  .object({
    characteristics: z.array(CharacteristicSummary),
    /** One sentence that says what they say. */
    finding: z.string(),
    /** Whether `group` of each still speaks of the bins as they are. */
    correlations: CorrelationStanding,
  })
  .meta({ id: 'CharacteristicList' });
export type CharacteristicList = z.infer<typeof CharacteristicList>;

export const CharacteristicDetail = z
  .object({
    ...summary,
    /** Exactly one entry of a specification's `characteristics`. */
    definition: z.custom<BinnedCharacteristic>((value) => typeof value === 'object' && value !== null),
    current: Bins,
    automatic: Bins,
    /** The constraints under which it was classed last. */
    constraints: Constraints,
    fine: Fine,
    /** Manual edits in effect, oldest first: `automatic`, edited by these in turn, is `current`. */
    editList: z.array(Edit),
    /** Edits of the earlier binning that make no sense here, each with the reason. */
    notCarriedList: z.array(Edit),
    changedBy: z.string(),
    changedAt: z.string(),
    abilities: z.array(z.enum(['edit'])),
  })
  .meta({ id: 'BinningCharacteristic' });
export type CharacteristicDetail = z.infer<typeof CharacteristicDetail>;

/** A save of the bench: the bins as they are now and the edits that lead from the automatic bins to them. */
export const SaveBins = z.strictObject({ bins: Bins, edits: z.array(SentEdit).max(500) });
export type SaveBins = z.infer<typeof SaveBins>;

/** A cut that lies on no fine class: the fine class is split there, from the stored column. */
export const NewFineEdge = z.strictObject({ edge: finite });
export type NewFineEdge = z.infer<typeof NewFineEdge>;

const chosen = z
  .array(z.strictObject({ id: z.uuid(), revision: z.int() }))
  .min(1, 'Choose at least one characteristic')
  .max(200);

/** Classes several characteristics anew; their manual edits are no longer in effect, so it says why where there are any. */
export const Reclass = z.strictObject({
  characteristics: chosen,
  /** Fine classes stay as they are. */
  constraints: AskedConstraints.omit({ fineClasses: true }),
  reason: z.string().trim().max(1000).default(''),
});
export type Reclass = z.input<typeof Reclass>;

export const SetInclusion = z
  .strictObject({ characteristics: chosen, included: z.boolean(), reason: z.string().trim().max(1000).default('') })
  .refine((sent) => sent.included || sent.reason.length > 0, { path: ['reason'], message: 'Say why it is left out' });
export type SetInclusion = z.input<typeof SetInclusion>;

export const EditHistory = z.object({ edits: z.array(Edit) }).meta({ id: 'BinningEditHistory' });
export type EditHistory = z.infer<typeof EditHistory>;

/** How an edit came to be no longer in effect. */
export const EditEnd = z.object({
  how: z.enum(['undone', 'classed anew']),
  by: z.string(),
  at: z.string(),
  reason: z.string().nullable(),
});
export type EditEnd = z.infer<typeof EditEnd>;

/** Edits by hand of every characteristic of a binning, undone and not carried over ones included, latest first. */
export const BinningHistory = z
  .object({
    edits: z.array(
      Edit.extend({
        characteristicId: z.uuid(),
        column: z.string(),
        /** Null while it is in effect, and for one that was never carried over. */
        ended: EditEnd.nullable(),
      }),
    ),
  })
  .meta({ id: 'BinningHistory' });
export type BinningHistory = z.infer<typeof BinningHistory>;

export const ofModel = z.strictObject({ modelId: z.uuid() });
export const ofBinning = z.strictObject({ binningId: z.uuid() });
export const ofCharacteristic = z.strictObject({ binningId: z.uuid(), characteristicId: z.uuid() });

/** Result of the run "class characteristics" (Run.result). */
export const ClassingResult = z.object({ binningId: z.uuid(), characteristics: z.int() });

/** Result of the run "correlate characteristics" (Run.result). */
export const CorrelationResult = z.object({ binningId: z.uuid(), characteristics: z.int() });

/** Result of the run "complete a binning" (Run.result): characteristics that lacked a figure. */
export const CompletionResult = z.object({ binningId: z.uuid(), characteristics: z.int() });

export const ReclassingRun = z.object({ runId: z.uuid() }).meta({ id: 'BinningReclassingRun' });
/** Result of the run that classes anew (Run.result). */
export const ReclassingResult = z.object({ binningId: z.uuid(), characteristics: z.int() });
