import { halvesRow, partition, replication, stability, stabilityRow, work } from '../testing/version';
import {
  aucWords,
  halfNumber,
  halvesFinding,
  hosmerLemeshowWords,
  latestByMethod,
  meetWords,
  nextTest,
  performanceFinding,
  pointsWords,
  shownRows,
  stabilityFinding,
  validationFinding,
} from './validation-view';

const plain = (text: string | null): string => (text ?? '').replaceAll('\u202F', ' ').replaceAll('\u2212', '-');

describe('a number of the two halves', () => {
  it('says how it meets', () => {
    expect(meetWords(halvesRow('x'))).toBe('equal');
    expect(plain(meetWords(halvesRow('x', { difference: 4.2e-13 })))).toBe('same to 4e-13');
    expect(plain(meetWords(halvesRow('x', { difference: 2.1e-5, meets: false })))).toBe('differs by 0.000021');
    expect(meetWords(halvesRow('x', { validator: null, difference: null, meets: false }))).toBe('only one half has it');
    expect(halfNumber(12)).toBe('12');
    expect(halfNumber(0.81507571)).toBe('0.8150757');
  });
  it('is shown with points only when asked, or when it does not meet', () => {
    const rows = replication().rows;
    expect(shownRows(rows, 'coefficients')).toHaveLength(3);
    expect(shownRows(rows, 'all')).toHaveLength(5);
    expect(shownRows([...rows.slice(0, 4), { ...rows[4], meets: false }], 'coefficients')).toHaveLength(4);
  });
  it('adds up to a sentence', () => {
    expect(plain(halvesFinding(replication()))).toBe('All 2 155 numbers meet, to 4e-13 at most, and 1 000 scores are equal.');
    expect(plain(halvesFinding(replication({ largestDifference: 0 })))).toBe('All 2 155 numbers are equal, and 1 000 scores are equal.');
    expect(plain(halvesFinding(replication({ matches: false, differing: 1, largestDifference: 0.021, scoresEqual: false })))).toBe(
      '1 number of 2 155 does not meet; the largest difference is 0.021, and of 1 000 scores some differ.',
    );
  });
});

describe('performance', () => {
  it('holds hold-out against development', () => {
    expect(performanceFinding([partition('development', 0.84), partition('holdOut', 0.82)])).toBe('Hold-out AUC 0.820 (0.780 to 0.860) is 0.020 below development’s, within its 95 % interval.');
    expect(performanceFinding([partition('development', 0.84), partition('holdOut', 0.76)])).toContain('beyond its 95 % interval');
    expect(performanceFinding([partition('development', 0.8), partition('holdOut', 0.81)])).toContain('no lower than development’s 0.800');
    expect(performanceFinding([partition('development', 0.8)])).toContain('no hold-out');
    expect(performanceFinding([])).toBeNull();
  });
  it('writes intervals and tests', () => {
    expect(aucWords(partition('holdOut', 0.8, { lower: null, upper: null }))).toBe('0.800');
    expect(hosmerLemeshowWords(partition('holdOut', 0.8))).toBe('9.78 on 8, p = 0.28');
    expect(hosmerLemeshowWords(partition('holdOut', 0.8, { hosmerLemeshow: null }))).toBe('not computed');
  });
});

describe('stability', () => {
  it('flags signs that fewer than 95 % of resamples share', () => {
    const rows = [stabilityRow('age'), stabilityRow('plans', { sameSign: 0.88, selected: 0.7 }), stabilityRow('job', { coefficient: 0, sameSign: 0.5 })];
    expect(plain(stabilityFinding(stability(rows)))).toBe('plans (88 %): fewer than 95 % of resamples agree in sign.');
  });
  it('else names what is kept least often', () => {
    expect(plain(stabilityFinding(stability([stabilityRow('age'), stabilityRow('home', { selected: 0.68 })])))).toBe('Every sign holds over 200 resamples; home is kept least often, in 68 %.');
    expect(stabilityFinding(stability([stabilityRow('age')]))).toBe('Every characteristic is kept, with its sign, in all 200 resamples.');
  });
  it('writes points with their interval', () => {
    expect(plain(pointsWords({ label: 'low', points: -10.2, lower: -14.1, upper: -6 }))).toBe('-10 (-14 to -6)');
    expect(pointsWords({ label: 'low', points: 3, lower: null, upper: null })).toBe('3');
  });
});

describe('the sentence and the next test of a validation', () => {
  const same = replication();
  const independent = replication({ evidenceNumber: 7, method: 'independent' });
  it('begin with the replication', () => {
    expect(validationFinding(work())).toContain('Not replicated yet');
    expect(nextTest(work())).toContain('Replicate from the stored raw file');
    expect(nextTest(work({ replications: [same] }))).toContain('independent solver');
    expect(nextTest(work({ replications: [same, independent] }))).toContain('stability');
    expect(nextTest(work({ replications: [same, independent], stability: [stability([])] }))).toBeNull();
  });
  it('say what met, by which methods', () => {
    expect(validationFinding(work({ replications: [independent, same] }))).toBe(
      'Replicated by same code in a new process and by an independent solver: every number meets. Hold-out AUC 0.820 (0.780 to 0.860).',
    );
  });
  it('judge by the newest replication of each method', () => {
    const again = replication({ evidenceNumber: 9, matches: false, differing: 2 });
    expect(latestByMethod([same, again, independent])).toEqual([again, independent]);
    expect(validationFinding(work({ replications: [same, again] }))).toContain('2 numbers do not meet');
    expect(nextTest(work({ replications: [same, again] }))).toContain('Find out why');
    expect(validationFinding(work({ replications: [again, replication({ evidenceNumber: 10 })] }))).toContain('every number meets');
  });
});
