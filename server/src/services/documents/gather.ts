import type { FitPath, FitSettings } from '@tallystone/contracts/fits/schema';
import type { Opening } from '@tallystone/contracts/out-of-time/schema';
import type { Protection } from '@tallystone/contracts/permissions/schema';
import type { CharacteristicBalance, ComparedPartition } from '@tallystone/contracts/samples/balance';
import { noLongerReplicable } from '@tallystone/contracts/samples/erased-words';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { OutcomeRefits } from '@tallystone/contracts/fits/outcome-refits';
import type { RuleCounts, SampleDefinitionContent, SensitivityCase } from '@tallystone/contracts/samples/definition';
import type { ColumnLabels, DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { takesPart } from '@tallystone/contracts/samples/flags';
import type { QualityReport } from '@tallystone/contracts/samples/quality';
import type { Result } from '@tallystone/contracts/result/types';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { VersionTextKey, VersionTexts } from '@tallystone/contracts/versions/schema';
import type { DocumentInput } from '../../documents/input';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import { VersionRow } from '../../models/version';
import type { VersionFigures } from '../../threads/freeze-version';
import { findModel } from '../models/find-model';
import { readCover, findCovered } from '../out-of-time/cover';
import { recordHead } from '../record/verify';
import { actorOf } from '../people/actor-of';
import type { SegmentGroups } from '../samples/quality/read-report';
import type { ReplicationEvidence } from '../validation/replicate';
import type { StabilityEvidence } from '../validation/stability';
import type { Beside } from '../versions/compared-with';
import { type FoundEvidence, readEvidence } from '../versions/evidence';
import { type FoundVersion, findVersion } from '../versions/find-version';

/** What the sample's evidence holds (version-evidence.ts). */
interface SampleEvidence {
  fileName: string;
  bytes: number;
  rows: number;
  columns: number;
  sha256: string;
  receivedBy: string;
  receivedAt: string;
  definition: SampleDefinitionContent;
  quality: { name: string; kind: string; profile: ColumnProfile }[];
  /** Absent in versions frozen before there were reports, null where none was made. */
  report?: QualityReport | null;
  /** Absent in versions frozen before this was counted. */
  counts?: { readonly sensitivity?: SensitivityCase[] | null; readonly byRule?: RuleCounts | null };
  /** Absent in versions frozen before there was a dictionary, or from when its labels alone were kept; null where none was written. */
  dictionary?: DictionaryEntry[] | null;
  labels?: ColumnLabels['labels'];
  /** Absent in versions frozen before they were kept with it, null where they were not made. */
  balance?: CharacteristicBalance[] | null;
  /** Absent in versions frozen before partitions could be compared in a draft. */
  compared?: ComparedPartition[];
  /** Absent in versions frozen before permissions were kept with them. */
  protection?: Protection;
  segments?: SegmentGroups[] | null;
}
interface ClassingEvidence {
  edits: { column: string; edit: string; reason: { code: string; text: string } | null; by: string; at: string }[];
  characteristics: { column: string; trend: string | null }[];
  bins: VersionFigures['bins'];
}
interface FitEvidence {
  choice: { rule: string; reason: string; by: string; at: string };
  fit: { settings: Pick<FitSettings, 'declined' | 'priorCorrection'> };
  /** Absent in versions frozen before it was kept with them. */
  priorCorrection?: FitPath['priorCorrection'];
}
type PerformanceEvidence = Pick<VersionFigures, 'distributions' | 'bandCalibrations'> & Partial<Beside> & { readonly refits?: OutcomeRefits | null };

/** Evidence with its number in the document. */
interface Numbered<Content> {
  readonly content: Content;
  readonly number: string;
}

/** Which section a text of the author stands in, and under what head. */
const textPlaces: Record<VersionTextKey, { section: number; topic: string }> = {
  recommendation: { section: 1, topic: 'Recommendation' },
  exclusionsRationale: { section: 4, topic: 'Rationale' },
  outcomeJustification: { section: 5, topic: 'Justification' },
  sourcesSuitability: { section: 6, topic: 'Suitability of the sources' },
  penaltyReason: { section: 9, topic: 'Why this penalty' },
  businessSense: { section: 10, topic: 'Business sense of each characteristic' },
  trendExceptions: { section: 8, topic: 'Trends that are not monotone' },
  signExceptions: { section: 10, topic: 'Sign exceptions' },
  performanceInterpretation: { section: 11, topic: 'Interpretation' },
  limitations: { section: 11, topic: 'Limitations' },
  monitoringPlan: { section: 1, topic: 'Monitoring plan' },
  changeReasons: { section: 18, topic: 'Reasons for changes' },
};

const acts = {
  freeze: 'frozen',
  submit: 'submitted',
  withdraw: 'withdrawn',
  start: 'validation started',
  conclude: 'concluded',
  accept: 'documentation accepted',
  return: 'documentation returned',
} as const;

/**
 * Everything the document of a version is made of, from frozen evidence and the record: nothing is calculated here and nothing is typed in. What
 * does not exist is null and prints as "not evidenced".
 */
export async function gatherDocument(context: Context, versionId: string, personId: string): Promise<DocumentInput> {
  const { sequelize, config, pool } = context;
  const [version, frozen] = await Promise.all([findVersion(sequelize, versionId), VersionRow.findByPk(versionId, { raw: true })]);
  if (!version || !frozen) throw new Error(`There is no version ${versionId}`);
  const [model, evidence, head, texts, history, edition, covered] = await Promise.all([
    findModel(sequelize, version.modelId),
    readEvidence(sequelize, versionId),
    recordHead(pool),
    textsOf(context, versionId),
    historyOf(context, version.modelId),
    rows<{ next: number }>(sequelize, 'SELECT coalesce(max(number), 0) + 1 AS next FROM documents WHERE version_id = $1', [versionId]),
    findCovered(sequelize, version.definitionId),
  ]);
  if (!model || !covered) throw new Error(`Version ${versionId} has lost its model or definition`);
  const cover = await readCover(sequelize, await actorOf(personId), covered);
  const specification = JSON.parse(frozen.specification) as Specification;
  const result = JSON.parse(frozen.result) as Result;
  const one = <T>(kind: FoundEvidence['kind']): Numbered<T> | null => {
    const entry = [...evidence].reverse().find((candidate) => candidate.kind === kind);
    return entry ? { content: entry.content as T, number: `E-${entry.number}` } : null;
  };
  const sample = one<SampleEvidence>('sample');
  const classing = one<ClassingEvidence>('classing');
  const fit = one<FitEvidence>('fit');
  const performance = one<PerformanceEvidence>('performance');
  const stability = one<StabilityEvidence>('stability');
  const concluded = [...version.acts].reverse().find(({ act }) => act === 'conclude');
  const shown = (partition: string): boolean => partition !== 'outOfTime' || cover.state !== 'covered';

  return {
    format: 'tallystone-document-input',
    formatVersion: 1,
    lender: config.lender,
    edition: edition[0].next,
    demonstration: config.demo,
    model: {
      inventoryNumber: model.inventoryNumber,
      name: model.name,
      purpose: model.purpose,
      product: model.product,
      population: model.population,
      jurisdiction: model.jurisdiction,
      owner: model.owner,
      materialityTier: model.materialityTier,
      intendedUse: model.intendedUse,
      prohibitedUse: model.prohibitedUse,
    },
    version: {
      label: String(version.number),
      state: version.state,
      fingerprint: version.fingerprint,
      codeVersion: version.codeVersion,
      frozenBy: version.frozenBy,
      frozenAt: version.frozenAt.toISOString(),
    },
    signatures: version.acts.map((entry) => ({
      act: acts[entry.act],
      name: entry.by,
      role: entry.role,
      at: entry.at,
      statement: [entry.conclusion, entry.statement].filter(Boolean).join('. ') || null,
      sequence: recorded(history, version, entry),
    })),
    conditions: (concluded?.conditions ?? []).map((text) => ({ text, kind: 'condition of the validator', owner: model.owner, due: null, discharged: null })),
    texts,
    columns: columnsOf(result, sample?.content ?? null),
    evidence: evidence.map((entry) => ({ number: `E-${entry.number}`, title: entry.title, madeBy: entry.by, madeAt: entry.at, sha256: entry.sha256 })),
    specification,
    result,
    resultEvidence: one('version')?.number ?? null,
    resultSha256: frozen.resultSha256,
    sourceFile: sample && {
      evidence: sample.number,
      fileName: sample.content.fileName,
      bytes: sample.content.bytes,
      rows: sample.content.rows,
      columns: sample.content.columns,
      sha256: sample.content.sha256,
      broughtInBy: sample.content.receivedBy,
      broughtInAt: sample.content.receivedAt,
      replicable: version.erased === null,
      note: version.erased && noLongerReplicable(version.erased),
    },
    waterfall: sample && waterfallOf(sample, specification, result),
    windows: sample && windowsOf(sample, specification),
    outcomeCounts: sample && outcomeCountsOf(sample),
    sensitivity: performance && sensitivityOf(performance),
    dictionary: sample && dictionaryOf(sample),
    quality: sample && {
      evidence: sample.number,
      rows: sample.content.rows,
      columns: sample.content.quality.map(({ name, kind, profile }) => qualityOf(name, kind, profile, sample.content)),
    },
    protection: sample && protectionOf(sample),
    qualityFlags: sample && flagsOf(sample),
    balance: sample?.content.balance ? { evidence: sample.number, characteristics: sample.content.balance, compared: sample.content.compared ?? null } : null,
    segments: sample && segmentsOf(sample, performance),
    priorCorrection: fit && correctionOf(fit),
    inferenceReason: fit && inferenceReasonOf(fit),
    acceptsOnly: performance?.content.acceptsOnly ? { evidence: performance.number, ...acceptsOnlyOf(performance.content.acceptsOnly, shown) } : null,
    classing: classing && {
      evidence: classing.number,
      characteristics: classing.content.bins.map(({ column, holdOut, outOfTime }) => ({
        column,
        trend: classing.content.characteristics.find((entry) => entry.column === column)?.trend ?? null,
        holdOut,
        outOfTime: shown('outOfTime') ? outOfTime : null,
        edits: classing.content.edits
          .filter((edit) => edit.column === column)
          .map(({ at, by, edit, reason }) => ({ at, by, edit, reason: reason && [reason.code, reason.text].filter(Boolean).join(': ') })),
      })),
    },
    outOfTime: {
      covered: cover.state === 'covered',
      openings: cover.openings.map(({ at, by, reason, under, ...opening }) => ({
        at,
        by,
        reason,
        beforeFreezing: Date.parse(at) < version.frozenAt.getTime(),
        under,
        sample: opening.sample,
        definition: opening.definition,
        sequence: openedAt(history, cover.openings, opening),
      })),
    },
    penaltyChoice: fit && { by: fit.content.choice.by, at: fit.content.choice.at, rule: fit.content.choice.rule, reason: fit.content.choice.reason || null },
    stability: stability && {
      evidence: stability.number,
      scheme: 'bootstrap, goods and bads apart',
      resamples: stability.content.resamples,
      seed: stability.content.seed,
      level: stability.content.level,
      characteristics: stability.content.rows.map((row) => ({
        column: row.column,
        selected: row.selected,
        sameSign: row.sameSign,
        coefficient: interval(row.lower, row.upper),
        points: row.bins.map((bin) => interval(bin.lower, bin.upper)),
      })),
    },
    scoreDistributions: (performance?.content.distributions ?? []).filter(({ partition }) => shown(partition)).map((entry) => ({ evidence: performance!.number, ...entry })),
    bandCalibrations: (performance?.content.bandCalibrations ?? []).filter(({ partition }) => shown(partition)).map((entry) => ({ evidence: performance!.number, ...entry })),
    // Evidence from before comparisons were frozen has none.
    comparisons: (performance?.content.comparisons ?? [])
      .filter(({ partition }) => shown(partition))
      .map(({ lower, upper, ...entry }) => ({ evidence: performance!.number, ...entry, interval: interval(lower, upper) })),
    replications: evidence.filter(({ kind }) => kind === 'replication').map(replicationOf),
    validation: validationOf(version),
    history: history.map(({ sequence, at, by, act, reason }) => ({ sequence, at, by, act, reason })),
    recordHead: { sequence: head.sequence, hash: head.hash },
  };
}

const recordActions = {
  freeze: 'version.frozen',
  submit: 'version.submitted',
  withdraw: 'version.withdrawn',
  start: 'version.validation-started',
  conclude: 'version.concluded',
  accept: 'version.documentation-accepted',
  return: 'version.documentation-returned',
} as const;

/** The place of an act in the record: acts of one kind on a version stand there in the order they were done. */
function recorded(history: readonly HistoryLine[], version: FoundVersion, entry: FoundVersion['acts'][number]): number | null {
  const place = version.acts.filter(({ act }) => act === entry.act).indexOf(entry);
  return history.filter((line) => line.entityId === version.id && line.act === recordActions[entry.act])[place]?.sequence ?? null;
}

/** The place of an opening in the record: those under one definition stand there in the order they happened. */
function openedAt(history: readonly HistoryLine[], openings: readonly Opening[], opening: Pick<Opening, 'id' | 'definitionId'>): number | null {
  const place = openings.filter(({ definitionId }) => definitionId === opening.definitionId).findIndex(({ id }) => id === opening.id);
  return history.filter((line) => line.act === 'out-of-time.opened' && line.entityId === opening.definitionId)[place]?.sequence ?? null;
}

/** What compliance permitted or withdrew until the version was frozen. */
function protectionOf({ content, number }: Numbered<SampleEvidence>): DocumentInput['protection'] {
  if (!content.protection) return null;
  const { columns, acts: done, unflagged } = content.protection;
  const holding = new Set(columns.map(({ permission }) => permission?.id));
  return {
    evidence: number,
    acts: done.map(({ id, ...entry }) => ({ ...entry, holds: holding.has(id) })),
    unflagged,
  };
}

const interval = (lower: number | null, upper: number | null): { lower: number; upper: number } | null => (lower === null || upper === null ? null : { lower, upper });

function waterfallOf(sample: Numbered<SampleEvidence>, specification: Specification, result: Result): DocumentInput['waterfall'] {
  const steps: NonNullable<DocumentInput['waterfall']>['steps'] = result.counts.excluded.map(({ reason, rows: taken, bads }) => ({ reason, rows: taken, bads }));
  if (specification.declined) steps.push({ reason: 'Declined applications, outcome not known', rows: result.counts.declined, bads: null });
  return { evidence: sample.number, sourceRows: sample.content.rows, steps };
}

/** Dates that the partitions span, as far as the specification states them and the column of dates tells. */
function windowsOf(sample: Numbered<SampleEvidence>, { partition }: Specification): DocumentInput['windows'] {
  if (!('seed' in partition) || partition.outOfTime === null) return null;
  const { column, from, to } = partition.outOfTime;
  const date = sample.content.quality.find(({ name }) => name === column)?.profile.date;
  if (!date) return null;
  const before = from === null ? null : { from: date.first, to: new Date(Date.parse(from) - 86_400_000).toISOString().slice(0, 10) };
  return {
    evidence: sample.number,
    performanceMonths: null,
    development: before,
    holdOut: before,
    outOfTime: { from: from ?? date.first, to: to ?? date.last },
  };
}

function qualityOf(name: string, kind: string, profile: ColumnProfile, { definition, dictionary, report }: Pick<SampleEvidence, 'definition' | 'dictionary' | 'report'>): NonNullable<DocumentInput['quality']>['columns'][number] {
  const defined = definition.columns.find(({ column }) => column === name);
  const [most] = profile.mostFrequent;
  const rowsOf = (value: string | number): number => profile.mostFrequent.find((entry) => entry.value === String(value))?.count ?? 0;
  const treatments = dictionary?.find(({ column }) => column === name)?.treatments ?? [];
  const treatmentOf = (value: string | number): string | null => treatments.find(({ code }) => code === String(value))?.treatment || null;
  return {
    column: name,
    type: kind,
    role: defined?.role ?? 'not used',
    protected: defined?.protected ?? false,
    distinct: profile.distinct,
    missing: profile.missing,
    special: (defined?.special ?? []).flatMap(({ label, values }) => values.map((value) => ({ code: String(value), meaning: label, treatment: treatmentOf(value), rows: rowsOf(value) }))),
    smallest: profile.numeric ? String(profile.numeric.smallest) : (profile.date?.first ?? null),
    largest: profile.numeric ? String(profile.numeric.largest) : (profile.date?.last ?? null),
    mostFrequent: most?.value ?? null,
    mostFrequentRows: most?.count ?? 0,
    // The report knows better than reading did: codes that the definition names are no longer suspected.
    flags: (report ? report.flags.filter(({ column }) => column === name) : profile.flags).map(({ finding }) => finding),
  };
}

/** Columns by the name that the dictionary had for them when the version was frozen: those of the file, and of the result in any case. */
function columnsOf({ characteristics }: Result, sample: SampleEvidence | null): DocumentInput['columns'] {
  const labels = new Map((sample?.dictionary ?? sample?.labels ?? []).map((entry) => [entry.column, entry]));
  const names = new Set([...characteristics.map(({ column }) => column), ...(sample?.quality ?? []).map(({ name }) => name)]);
  return [...names].map((column) => ({ column, label: labels.get(column)?.label || column, unit: labels.get(column)?.unit || null }));
}

/** Of columns that the dictionary describes; their labels and units stand with every column. */
function dictionaryOf({ content, number }: Numbered<SampleEvidence>): DocumentInput['dictionary'] {
  return content.dictionary ? { evidence: number, lines: content.dictionary.map(({ column, description }) => ({ column, description })) } : null;
}

/** Counted when the definition was confirmed; nothing of out-of-time is in it. */
function outcomeCountsOf({ content, number }: Numbered<SampleEvidence>): DocumentInput['outcomeCounts'] {
  return { evidence: number, readings: content.counts?.sensitivity ?? null, byRule: content.counts?.byRule ?? null };
}

/** Null where the version was frozen before its fit was repeated. */
function sensitivityOf({ content: { refits }, number }: Numbered<PerformanceEvidence>): DocumentInput['sensitivity'] {
  if (refits === undefined) return null;
  if (refits === null) return { evidence: number, partition: 'development', rows: 0, approvalRate: null, cases: [] };
  const { partition, rows: count, approvalRate, at } = refits;
  return { evidence: number, partition, rows: count, approvalRate, cases: at[0].cases };
}

function segmentsOf({ content, number }: Numbered<SampleEvidence>, performance: Numbered<PerformanceEvidence> | null): DocumentInput['segments'] {
  if (!content.segments) return null;
  const figures = performance?.content.segments ?? null;
  return {
    evidence: number,
    columns: content.segments.map((segment) => ({
      ...segment,
      holdOut:
        performance === null || figures === null
          ? null
          : {
              evidence: performance.number,
              values: figures.filter(({ column }) => column === segment.column).map(({ value, rows: count, bads, auc }) => ({ value, rows: count, bads, auc })),
            },
    })),
  };
}

function correctionOf({ content, number }: Numbered<FitEvidence>): DocumentInput['priorCorrection'] {
  const { priorCorrection } = content;
  return priorCorrection ? { evidence: number, ...priorCorrection, reason: content.fit.settings.priorCorrection?.reason ?? null } : null;
}

function inferenceReasonOf({ content, number }: Numbered<FitEvidence>): DocumentInput['inferenceReason'] {
  // Settings from before there was inference have none.
  const { declined } = content.fit.settings as Partial<Pick<FitSettings, 'declined'>>;
  return declined && declined.method !== 'none' ? { evidence: number, reason: declined.reason } : null;
}

function acceptsOnlyOf(beside: NonNullable<Beside['acceptsOnly']>, shown: (partition: string) => boolean): Omit<NonNullable<DocumentInput['acceptsOnly']>, 'evidence'> {
  return { ...beside, coefficients: [...beside.coefficients], outOfTime: shown('outOfTime') ? beside.outOfTime : null };
}

/** What the quality report raised and how it was answered when the version was frozen. */
function flagsOf({ content, number }: Numbered<SampleEvidence>): DocumentInput['qualityFlags'] {
  if (!content.report) return null;
  const roles = new Map(content.report.columns.map(({ column, role }) => [column, role]));
  return {
    evidence: number,
    madeAt: content.report.madeAt,
    flags: content.report.flags.map(({ column, weight, finding, answer }) => ({ column, weight, finding, answer, takesPart: column === null || takesPart(roles.get(column)) })),
  };
}

function replicationOf(entry: FoundEvidence): DocumentInput['replications'][number] {
  const content = entry.content as ReplicationEvidence;
  return {
    evidence: `E-${entry.number}`,
    method: content.method === 'independent' ? 'independent method' : 'same code, new process',
    solver: `${content.solver.name} ${content.solver.version}`,
    by: entry.by,
    at: entry.at,
    matches: content.matches,
    numbersCompared: content.compared,
    numbersDiffering: content.differing,
    largestCoefficientDifference: content.largestCoefficientDifference,
    largestPointsDifference: content.largestPointsDifference,
    integerScoresEqual: content.scoresEqual,
    specificationSha256: content.specificationSha256,
    dataSha256: content.dataSha256,
    resultSha256: content.resultSha256,
    intercept: content.intercept,
    coefficients: [...content.coefficients],
    challenge: (content.challenge as DocumentInput['replications'][number]['challenge'] | undefined) ?? null,
  };
}

function validationOf(version: FoundVersion): DocumentInput['validation'] {
  const started = [...version.acts].reverse().find(({ act }) => act === 'start');
  const concluded = [...version.acts].reverse().find(({ act }) => act === 'conclude');
  const by = concluded ?? started;
  if (!by || version.state === 'In development' || version.state === 'Submitted') return null;
  return {
    validator: by.by,
    scope: started?.statement || null,
    opinion: concluded?.statement ?? null,
    conclusion: concluded?.conclusion ?? null,
    concludedAt: concluded?.at ?? null,
    findings: null,
  };
}

async function textsOf({ sequelize }: Context, versionId: string): Promise<DocumentInput['texts']> {
  const [row] = await rows<{ texts: VersionTexts; by: string; at: Date }>(
    sequelize,
    'SELECT t.texts, p.name AS by, t.changed_at AS at FROM version_texts t JOIN people p ON p.id = t.changed_by WHERE t.version_id = $1',
    [versionId],
  );
  return (Object.entries(row?.texts ?? {}) as [VersionTextKey, string][])
    .filter(([, text]) => text.trim() !== '')
    .map(([key, text]) => ({ ...textPlaces[key], text, author: row.by, writtenAt: row.at.toISOString() }));
}

type HistoryLine = NonNullable<DocumentInput['history']>[number] & { entityId: string | null };

async function historyOf({ sequelize }: Context, modelId: string): Promise<HistoryLine[]> {
  const all = await rows<Omit<HistoryLine, 'at' | 'sequence'> & { at: Date; sequence: string }>(
    sequelize,
    `SELECT sequence, at, actor_name AS by, action AS act, reason, entity_id AS "entityId" FROM record WHERE model_id = $1 ORDER BY sequence`,
    [modelId],
  );
  return all.map((line) => ({ ...line, sequence: Number(line.sequence), at: line.at.toISOString(), reason: line.reason || null }));
}
