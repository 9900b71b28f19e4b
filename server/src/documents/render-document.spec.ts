import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { evidenceFingerprint } from './fingerprints';
import type { DocumentInput } from './input';
import { pagesOf, renderDocument } from './render-document';
import { page } from './tokens';
import { inventedInput } from './testing/invented-input';
import { hash } from './testing/invented-result';

/** Text and geometry are read back with poppler's pdftotext and pdfinfo, an independent reader. */
const fixedDate = new Date('2026-11-30T12:00:00.000Z');
let folder: string;
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'document-'));
});
afterAll(() => rmSync(folder, { recursive: true }));

function poppler(tool: string, bytes: Buffer, ...options: string[]): string {
  const file = join(folder, 'document.pdf');
  writeFileSync(file, bytes);
  return execFileSync(tool, tool === 'pdftotext' ? [...options, file, '-'] : [...options, file], {
    encoding: 'utf8',
    maxBuffer: 1e9,
  });
}

/** The text with any run of white space (thin spaces too) made one blank, so that line breaks do not matter. */
const wordsOf = (bytes: Buffer): string => poppler('pdftotext', bytes, '-layout').replace(/\s+/g, ' ');

interface Word {
  page: number;
  left: number;
  top: number;
  right: number;
  bottom: number;
  text: string;
}

function placedWords(bytes: Buffer): Word[] {
  const words: Word[] = [];
  let number = 0;
  for (const match of poppler('pdftotext', bytes, '-bbox').matchAll(
    /<page |<word xMin="([\d.-]+)" yMin="([\d.-]+)" xMax="([\d.-]+)" yMax="([\d.-]+)">(.*?)<\/word>/g,
  )) {
    if (match[0] === '<page ') number += 1;
    else {
      const [left, top, right, bottom] = match.slice(1, 5).map(Number);
      words.push({ page: number, left, top, right, bottom, text: match[5] });
    }
  }
  return words;
}

/** Words that leave the frame of the text: a point of slack for what glyphs overhang, and the footer's own lines below it. */
const outside = (words: Word[]): Word[] =>
  words.filter(
    (word) =>
      word.left < page.left - 1 || word.right > page.width - page.right + 1 || word.top < 40 || word.bottom > page.height - 14,
  );

/** Pairs of words on one page that cover each other by more than their thin edges. */
function overlapping(words: Word[]): [string, string][] {
  const found: [string, string][] = [];
  const byPage = new Map<number, Word[]>();
  for (const word of words) byPage.set(word.page, [...(byPage.get(word.page) ?? []), word]);
  for (const list of byPage.values()) {
    const sorted = [...list].sort((first, second) => first.top - second.top);
    sorted.forEach((first, index) => {
      for (const second of sorted.slice(index + 1)) {
        if (second.top >= first.bottom) break;
        const high = Math.min(first.bottom, second.bottom) - Math.max(first.top, second.top);
        const wide = Math.min(first.right, second.right) - Math.max(first.left, second.left);
        if (wide > 0.8 && high > 0.55 * Math.min(first.bottom - first.top, second.bottom - second.top))
          found.push([first.text, second.text]);
      }
    });
  }
  return found;
}

describe('the eyes of this spec', () => {
  const word = (left: number, top: number): Word => ({
    page: 1,
    left,
    top,
    right: left + 40,
    bottom: top + 9,
    text: `${left},${top}`,
  });
  it('see a word on another and one beyond the margin, and nothing in orderly lines', () => {
    expect(overlapping([word(60, 100), word(80, 102)])).toEqual([['60,100', '80,102']]);
    expect(overlapping([word(60, 100), word(104, 100), word(60, 111)])).toEqual([]);
    expect(outside([word(520, 100), word(100, 100), word(20, 100)]).map(({ left }) => left)).toEqual([520, 20]);
  });
});

describe('the document of a complete version', () => {
  const input = inventedInput();
  let bytes: Buffer;
  let words: string;
  beforeAll(async () => {
    bytes = await renderDocument(input, { fixedDate });
    words = wordsOf(bytes);
  }, 120_000);

  it('has the same bytes for the same input and date, and others for another date', async () => {
    expect((await renderDocument(inventedInput(), { fixedDate })).equals(bytes)).toBe(true);
    expect((await renderDocument(inventedInput(), { fixedDate: new Date('2026-12-01T12:00:00.000Z') })).equals(bytes)).toBe(
      false,
    );
  }, 180_000);

  it('says the numbers of the result', () => {
    expect(words).toContain('AUC 0.781 0.774 0.758');
    expect(words).toContain('0.764 to 0.798'); // 0.781 ∓ 1.959964 × 0.0087
    expect(words).toContain('Hosmer-Lemeshow statistic 9.31 9.31 9.31');
    expect(words).toContain('Hosmer-Lemeshow p-value 0.317 0.317 0.317');
    expect(words).toContain('Rows with known outcome 10 000 4 286 2 746');
    expect(words).toContain('optimality residual 3.20e−11');
    expect(words).toContain('Penalty chosen 0.00428521 by the one-standard-error rule [E-2]');
    expect(words).toContain('keeps 11 characteristics of 12');
  });

  it('says each coefficient and each points value', () => {
    for (const { coefficient, bins } of input.result.characteristics) {
      if (coefficient === null || coefficient === 0) continue;
      expect(words).toContain(coefficient.toFixed(6));
      for (const bin of bins)
        expect(words).toContain(`${bin.points.toFixed(4).replace('-', '−')} ${String(bin.pointsRounded).replace('-', '−')}`);
    }
  });

  it('reconciles the waterfall, and says so when it does not', async () => {
    expect(words).toContain('The steps reconcile exactly');
    const off = inventedInput();
    off.waterfall!.steps[0].rows -= 3;
    expect(wordsOf(await renderDocument(off, { fixedDate }))).toContain(
      'The steps do not reconcile: 3 rows are not accounted for',
    );
  }, 120_000);

  it('bears its fingerprints on the cover and, short, on each page', () => {
    const cover = poppler('pdftotext', bytes, '-layout', '-l', '1');
    const pages = Number(/Pages:\s+(\d+)/.exec(poppler('pdfinfo', bytes))?.[1]);
    for (const whole of [
      input.version.fingerprint,
      input.result.dataSha256,
      evidenceFingerprint(input.evidence),
      input.recordHead.hash,
    ]) {
      expect(cover).toContain(whole);
    }
    expect(pagesOf(bytes)).toBe(pages);
    const feet = words.match(
      new RegExp(
        `version ${input.version.fingerprint.slice(0, 16)} evidence ${evidenceFingerprint(input.evidence).slice(0, 16)} record 251`,
        'g',
      ),
    );
    expect(feet).toHaveLength(pages);
    expect(words).toContain(`${pages} of ${pages}`);
  });

  it('lists all evidence with its whole SHA-256', () => {
    for (const item of input.evidence) expect(words).toContain(`${item.title} ${item.sha256}`);
  });

  it('has the sections of this edition in the contents and names those that it has not', () => {
    for (const title of [
      '1 Summary',
      '2 Purpose',
      '4 Population',
      '5 Outcome',
      '6 Data',
      '7 Sample',
      '8 Classing',
      '9 Method',
      '10 Final model',
      '11 Performance',
      '15 Validation',
      '18 Change',
    ]) {
      expect(words).toContain(title);
    }
    expect(words).toContain('Sections 3, 12, 13, 14, 16, 17 of the lender’s outline are not part of this edition');
  });

  it('prints the cautions and how often the out-of-time figures were opened', () => {
    expect(words).toContain('aids to judgement');
    expect(words).toContain('Qualified legal, compliance and validation staff decide');
    expect(words).toContain('Before freezing, the out-of-time figures were opened 1 time, under an earlier definition; after it, not at all.');
    expect(words).toMatch(/1 of sample 1, earlier +yes/);
    expect(words).toContain('its deviance is optimistic');
  });

  it('stands with the names that the dictionary gives, their units, and what is done about special codes', () => {
    expect(words).toContain('Columns by their names [E-1] 1 column is not described and stands under its heading.');
    expect(words).toContain('enquiries_6m Enquiries, 6 months – What enquiries_6m says of an applicant at application.');
    expect(words).toContain('Card utilisation (%) number characteristic');
    expect(words).toContain('Card utilisation -999 no bureau record Points of its own bin. 1 400');
    expect(words).toContain('no bureau record not evidenced 1 404');
  });

  it('says what other readings of the indeterminates make of the bad rate', () => {
    expect(words).toContain('it would be 9.7 % with every indeterminate good and 13.0 % with every one bad');
    expect(words).toContain('all bad 9 000 1 350 13.0 % 3 857 779 16.8 %');
  });

  it('says what the fit becomes with other readings of the indeterminates', () => {
    expect(words).toContain('On the 4 321 goods and bads of the hold-out the Gini moves by +0.002 with every indeterminate good and by −0.018 with every one bad');
    expect(words).toContain('all good 9 700 1 050 7 0.514 +0.002 0.996 1.2 %');
    expect(words).toContain('all bad (not converged) 9 000 1 350 8 0.494 −0.018 0.981 3.4 %');
    expect(words).toContain('Decisions at the same approval rate, 72.4 %.');
  });

  it('holds each characteristic against development, by the thresholds and by chance', () => {
    expect(words).toContain(
      '1 characteristic is spread differently than in development, with an index above 0.25: Months since arrears.',
    );
    expect(words).toContain('(1/N + 1/M) times a chi-square with B − 1 degrees of freedom');
    expect(words).toMatch(/0\.009 0\.006 [^.]*below 0\.10,? more than/);
  });

  it('names every partition that was compared before one was confirmed', () => {
    expect(words).toContain(
      '2 partitions were compared before the definition was confirmed: seed 3, 30 % hold-out, out-of-time by applied_on from 2025-01-01 (largest index 0.310); seed 7,',
    );
  });

  it('shows what segments split, reads no small one, and tells nothing of a protected one', () => {
    expect(words).toContain('The bad rate runs from 8.2 % (Harbour) to 12.5 % (Marshes).');
    expect(words).toContain('Harbour 14 000 7 800 700 8.2 % 7.7 % to 8.8 % 2 550 214 0.781');
    expect(words).toContain('Islands 73 few few few – 8 few –');
    expect(words).toContain('sex is protected: what it splits is not printed here');
  });

  it('says who permitted a protected column with which citation, what was withdrawn, and what is flagged no longer', () => {
    expect(words).toMatch(/Protected columns: Employment \[E-1\]\. Employment stands among the characteristics, by permission of compliance alone\./i);
    expect(words).toMatch(/permitted, holds Section 14 of the invented/);
    expect(words).toContain('Section 4 is about deposits.');
    expect(words).toMatch(/flagged no longer: Region \(characteristic; flagged by definition 1 of sample 1; no reason is given\)/i);
  });

  it('prints the flags of the quality report with their answers, and counts alone those of columns that take no part', () => {
    expect(words).toContain('accepted: A new channel was opened in');
    expect(words).toContain('1 flag of 2 has no answer. 1 further flag is a note or of a column that takes no part.');
    expect(words).not.toContain('Missing only for goods.');
  });

  it('is tagged, titled and in a language', () => {
    const facts = poppler('pdfinfo', bytes);
    expect(facts).toMatch(/Tagged:\s+yes/);
    expect(facts).toMatch(/Title:\s+Personal loans, application scorecard, version 1: model-governance document/);
    expect(facts).toMatch(/PDF version:\s+1\.7/);
    expect(bytes.includes('/Lang (en-GB)')).toBe(true);
    const structure = poppler('pdfinfo', bytes, '-struct');
    expect(structure).toContain('H1');
    expect(structure).toContain('Figure');
    expect(structure).toContain('TH');
  });

  it('keeps all text inside its margins and no word on another', () => {
    const placed = placedWords(bytes);
    expect(placed.length).toBeGreaterThan(2000);
    expect(outside(placed)).toEqual([]);
    expect(overlapping(placed)).toEqual([]);
  });
});

describe('a version with declined applicants and a prior correction', () => {
  const input = inventedInput();
  const kept = input.result.characteristics.filter(({ coefficient }) => coefficient);
  const figures = {
    rows: 4286,
    bads: 429,
    auc: 0.7702,
    aucLower: 0.75,
    aucUpper: 0.79,
    ks: 0.41,
    brier: 0.0815,
    calibrationInTheLarge: -0.044,
    calibrationSlope: 1.1,
  };
  beforeAll(() => {
    input.specification.declined = { column: 'decision', values: ['declined'], method: 'parcelling', bands: 8, uplift: 2 };
    input.specification.priorCorrection = { populationBadRate: 0.04 };
    input.priorCorrection = { evidence: 'E-2', sampleBadRate: 0.1, populationBadRate: 0.04, shift: 0.980829, reason: 'Portfolio of 2024' };
    input.inferenceReason = { evidence: 'E-2', reason: 'A third was declined' };
    input.acceptsOnly = {
      evidence: 'E-2',
      name: 'Plain',
      number: 3,
      chosenBy: 'not chosen',
      lambda: 0.005,
      kept: 10,
      development: figures,
      holdOut: figures,
      outOfTime: null,
      coefficients: kept.map(({ column, coefficient }, place) => ({ column, own: coefficient, beside: place === 0 ? -0.1234 : coefficient })),
    };
  }); // prettier-ignore

  it('says why, with the accepts-only fit beside it and its cautions', async () => {
    const bytes = await renderDocument(input, { fixedDate });
    const words = wordsOf(bytes);
    expect(words).toContain('Reason Portfolio of 2024 [E-2]');
    expect(words).toContain('Added to the intercept 0.980829 in ln(good:bad) [E-2]');
    expect(words).toContain('Reject inference parcelling: 8 score bands, bad rate times 2');
    expect(words).toContain('Reason A third was declined [E-2]');
    expect(words).toContain('Its assumptions cannot be tested on accepted applications');
    expect(words).toContain('Characteristics kept 11 10');
    expect(words).toContain('Hold-out, AUC 0.774 0.770');
    expect(words).toContain('Card utilisation: the sign changes.');
    expect(outside(placedWords(bytes))).toEqual([]);
  }, 120_000);
});

describe('a document with much missing', () => {
  it('says "not evidenced" for each part that is not there, and covers out-of-time figures', async () => {
    const bare: DocumentInput = {
      ...inventedInput(),
      signatures: [],
      texts: [],
      evidence: [],
      resultEvidence: null,
      sourceFile: null,
      waterfall: null,
      windows: null,
      outcomeCounts: null,
      dictionary: null,
      quality: null,
      qualityFlags: null,
      balance: null,
      segments: null,
      classing: null,
      protection: null,
      sensitivity: null,
      outOfTime: { covered: true, openings: [] },
      penaltyChoice: null,
      stability: null,
      scoreDistributions: [],
      bandCalibrations: [],
      comparisons: [],
      replications: [],
      validation: null,
      history: null,
    };
    bare.result = { ...bare.result, crossValidation: null };
    bare.specification.priorCorrection = { populationBadRate: 0.04 };
    bare.specification.declined = { column: 'decision', values: ['declined'], method: 'fuzzy', bands: 10, uplift: 1.5 };
    const words = wordsOf(await renderDocument(bare, { fixedDate }));
    for (const what of [
      'Replication',
      'Sign-offs',
      'Recommendation (to be written by the author)',
      'Waterfall from the rows of the file to the rows of the sample',
      'Source file',
      'Bad rate with indeterminates as good and as bad',
      'Fit repeated with indeterminates as good and as bad',
      'Dates of application by partition',
      'Data dictionary',
      'Quality of the columns',
      'Stability index by characteristic between the partitions',
      'What segments split',
      'Fit on accepted applicants alone',
      'Quality report',
      'Cross-validation',
      'Choice of the penalty',
      'Stability over resamples',
      'Score distribution',
      'Mean PD by band',
      'Validation',
      'Opinion (to be written by the validator)',
      'Change history from the record of actions',
      'Evidence',
    ]) {
      expect(words).toContain(`${what}: not evidenced.`);
    }
    expect(words).toContain('Bad rate of the sample not evidenced Added to the intercept not evidenced Reason not evidenced');
    expect(words).toContain('by the estimated PD Reason not evidenced');
    expect(words).toContain('Headline figures by partition [not evidenced]');
    expect(words).toContain('Out-of-time figures are covered and are not printed');
    expect(words).not.toContain('0.758');
  }, 120_000);
});

describe('a document of uncommon size', () => {
  it('keeps 60 characteristics, long texts and long names inside the pages', async () => {
    const input = inventedInput(60);
    const long = 'The reasons are many and each is given in full, with its circumstances and its consequences. '.repeat(120);
    input.texts.push({
      section: 11,
      topic: 'Interpretation',
      text: `${long}\n\n${long}`,
      author: 'A person with a name that runs on and on and on',
      writtenAt: '2026-11-20',
    });
    input.validation!.opinion = long;
    input.validation!.findings![0].description = long;
    input.columns[3].label = 'Payment to income, of the loan asked for, before any other loan is counted, in hundredths';
    input.result.characteristics[1].bins[0].label = Array.from({ length: 400 }, (_, index) => `category ${index}`).join(', ');
    input.result.characteristics[2].bins[1].label = 'x'.repeat(300);
    input.model.name =
      'Personal loans of all kinds through every channel, application scorecard for new and for returning members';
    input.version.state = 'Approved with conditions';
    input.history = Array.from({ length: 120 }, (_, index) => ({
      sequence: index + 1,
      at: '2026-11-20T10:00:00.000Z',
      by: 'Modeller at Saltmarsh Mutual',
      act: `edited ${index}`,
      reason: null,
    }));
    const bytes = await renderDocument(input, { fixedDate });
    const placed = placedWords(bytes);
    const pages = Math.max(...placed.map((word) => word.page));
    expect(pages).toBeGreaterThan(30);
    expect(pages).toBeLessThan(120);
    expect(outside(placed)).toEqual([]);
    expect(overlapping(placed)).toEqual([]);
    expect(placed.filter((word) => word.text.startsWith('category')).length).toBeGreaterThan(390);
  }, 240_000);
});

describe('an input that does not hang together', () => {
  it('is refused with every problem and its place', async () => {
    const input = inventedInput();
    input.stability!.evidence = 'E-99';
    input.classing!.characteristics[0].holdOut!.pop();
    input.scoreDistributions[0].goods.pop();
    input.recordHead.hash = 'short';
    const error: unknown = await renderDocument(input, { fixedDate }).catch((reason: unknown) => reason);
    expect(String(error)).toContain('recordHead');
    input.recordHead.hash = hash('record');
    const second = String(await renderDocument(input, { fixedDate }).catch((reason: unknown) => reason));
    expect(second).toContain('E-99 is not in the list of evidence');
    expect(second).toContain('has 4 bins in the result and 3 here');
    expect(second).toContain('One count fewer than edges is wanted');
  });
});
