import { smallScorecard } from '../testing/scorecard';
import {
  atCutOff,
  bandLabel,
  bandsFinding,
  cutOffLabel,
  decisionWords,
  freezeWords,
  list,
  pointsUnder,
  readEdges,
  roundingWords,
  scaleReadings,
  scorecardDecision,
  scorecardFinding,
  withoutReason,
} from './scorecard-view';

const plain = (text: string | null): string => (text ?? '').replaceAll('\u202F', ' ').replaceAll('\u2212', '-');
const withSettings = (change: Partial<typeof smallScorecard.settings>) => ({ ...smallScorecard, settings: { ...smallScorecard.settings, ...change } });

describe('points of a scorecard', () => {
  it('follow the scaling: Factor x coefficient x WOE in the base form', () => {
    const [age, home] = pointsUnder(smallScorecard, smallScorecard.settings.scaling);
    // Factor 20 / ln 2 = 28.8539; x 0.5 = 14.43; x 0.5 x 0.4 = 5.77
    expect(age.attributes.map(({ points }) => points)).toEqual([-14, 14]);
    expect(home.attributes.map(({ points }) => points)).toEqual([6, -6]);
    expect(age.range).toBe(28);
    expect(age.attributes[0]).toMatchObject({ share: 0.4, badRate: 0.4 });
  });

  it('double when the points to double do, and share the base points when spread', () => {
    const wider = pointsUnder(smallScorecard, { ...smallScorecard.settings.scaling, pointsToDouble: 40 });
    expect(wider[0].range).toBe(58); // 57.7 apart, each end rounded: 29 and -29
    const spread = pointsUnder(smallScorecard, { ...smallScorecard.settings.scaling, intercept: 'spread' });
    // (487.12 + 28.85) / 2 = 257.99 for each of the two
    expect(Math.round(spread[0].neutral)).toBe(258);
  });

  it('say what a scale means', () => {
    expect(scaleReadings(smallScorecard.settings.scaling).map(({ text }) => text)).toEqual(['20.0', '487.1', '28.85']);
  });
});

describe('the sentence of the scorecard', () => {
  it('tells the range and what can decide most', () => {
    expect(scorecardFinding(smallScorecard)).toBe('2 characteristics make scores from 532 to 568; age can decide most, with 28 points between its attributes.');
  });
  it('tells a sign against WOE first, and nothing kept before that', () => {
    const [age, home] = smallScorecard.characteristics;
    expect(scorecardFinding({ ...smallScorecard, characteristics: [age, { ...home, coefficient: -0.1 }] })).toBe('home runs against WOE: there, a lower risk costs points.');
    expect(scorecardFinding({ ...smallScorecard, characteristics: [] })).toContain('same score');
    // Without the rows there are points and no scores.
    expect(scorecardFinding({ ...smallScorecard, distribution: null, rounding: null, smallestScore: null, largestScore: null })).toBe(
      '2 characteristics make the score; age can decide most, with 28 points between its attributes.',
    );
  });
});

describe('what to decide next', () => {
  it('goes from the scale to reasons, cut-off and freezing', () => {
    expect(scorecardDecision({ ...smallScorecard, revision: 0 })).toBe('scale');
    const untold = withSettings({ reasons: { ...smallScorecard.settings.reasons, texts: { age: ' ' } } });
    expect(withoutReason(untold)).toEqual(['age', 'home']);
    expect(scorecardDecision(untold)).toBe('reasons');
    expect(decisionWords(untold)).toMatch(/^age and home: say what/);
    expect(freezeWords(untold)).toContain('2 characteristics have no reason text');
    expect(freezeWords(smallScorecard)).not.toContain('reason text');
    expect(scorecardDecision(withSettings({ cutOff: null }))).toBe('cut-off');
    expect(scorecardDecision(smallScorecard)).toBe('freeze');
    expect(scorecardDecision({ ...smallScorecard, characteristics: [] })).toBe('nothing-kept');
  });
});

describe('the cut-off', () => {
  const { distribution } = smallScorecard;
  it('approves what scores at or above it', () => {
    // from 550: goods 30 + 40, bads 4 + 1, of 125
    expect(atCutOff(distribution, 550)).toEqual({ approved: 0.6, badRate: 5 / 75, exact: true });
    expect(atCutOff(distribution, 400).approved).toBe(1);
    expect(atCutOff(distribution, 600)).toMatchObject({ approved: 0, badRate: null });
  });
  it('says "about" inside a step', () => {
    expect(plain(cutOffLabel(distribution, 550))).toBe('cut-off 550: approves 60.0 %, bad rate 6.7 %');
    expect(plain(cutOffLabel(distribution, 555))).toBe('cut-off 555: approves about 32.8 %, bad rate about 2.4 %');
  });
});

describe('bands', () => {
  it('are named by whole scores, closed below', () => {
    expect(smallScorecard.bands.map(bandLabel)).toEqual(['below 540', '540 to 559', '560 and above']);
    expect(bandLabel({ from: null, to: null })).toBe('all scores');
  });
  it('say whether the bad rate falls', () => {
    expect(plain(bandsFinding(smallScorecard.bands))).toBe('Bad rate from 50.0 % to 3.3 % over 3 bands, falling from each to the next.');
    const [low, middle, high] = smallScorecard.bands;
    const back = [low, middle, { ...high, development: { rows: 30, goods: 20, bads: 10 } }];
    expect(bandsFinding(back)).toContain('it does not fall at 560 and above');
  });
});

describe('small words', () => {
  it('tell what rounding costs', () => {
    expect(plain(roundingWords(smallScorecard))).toBe('Whole points move a score by 0.9 at most; rounding moves AUC by -0.0020, and changes 0.60 % of decisions at the cut-off.');
    expect(roundingWords({ rounding: { largest: 1, auc: 0.8, aucRounded: 0.8001, decisionsChanged: null } })).toContain('leaves AUC at 0.800');
  });
  it('read edges that rise, and nothing else', () => {
    expect(readEdges('440, 460 480')).toEqual([440, 460, 480]);
    expect(readEdges('\u221210 20')).toEqual([-10, 20]);
    for (const wrong of ['', '460 440', '440 440', 'a b']) expect(readEdges(wrong)).toBeNull();
  });
  it('list names', () => {
    expect([list([]), list(['a']), list(['a', 'b']), list(['a', 'b', 'c'])]).toEqual(['', 'a', 'a and b', 'a, b and c']);
  });
});
