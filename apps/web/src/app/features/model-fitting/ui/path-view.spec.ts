import { smallPath } from '../testing/path';
import {
  correctionWords,
  decisionAt,
  entryOrder,
  inferenceWords,
  nearestIndex,
  notchLabel,
  pathFinding,
  placeBeside,
  pathTitle,
  ruleAt,
  scorecardAt,
} from './path-view';

describe('what a path shows', () => {
  it('lists characteristics in the order they enter', () => {
    expect(entryOrder(smallPath())).toEqual([0, 1, 2]);
    const turned = smallPath({ coefficients: smallPath().coefficients.map(([age, income, phone]) => [phone, age, income]) });
    expect(entryOrder(turned)).toEqual([1, 2, 0]);
  });

  it('gives the points of the library at a penalty, rounded bin by bin', () => {
    const [age, income] = scorecardAt(smallPath(), 4);
    // Factor 25 / ln 2 = 36.0674, offset 500 - 36.0674 ln 16 = 400; base points (400 + 36.0674 x 2.23) / 2 = 240.215 for each of two kept;
    // bins 240.215 + 36.0674 x 0.7 x WOE = 227.59, 240.215, 255.36.
    expect(age.points).toEqual([228, 240, 255]);
    expect(age.range).toBe(27);
    expect(income.kept).toBe(true);
    expect(scorecardAt(smallPath(), 0).every((entry) => entry.range === null)).toBe(true);
  });

  it('marks a coefficient that runs against WOE and asks for a decision', () => {
    expect(scorecardAt(smallPath(), 5)[2].againstWoe).toBe(true);
    expect(decisionAt(smallPath(), 5)).toContain('phone');
    expect(decisionAt(smallPath(), 5)).toContain('against WOE');
  });

  it('names what would enter next while the minimum is not reached', () => {
    expect(decisionAt(smallPath(), 2)).toMatch(/^income would enter at penalty 0\.010\./);
    expect(decisionAt(smallPath(), 2)).toContain('Take it or leave it');
    expect(decisionAt(smallPath(), 4)).toBeNull();
    const both = smallPath({ coefficients: smallPath().coefficients.map(([age, income]) => [age, income, income]) });
    expect(decisionAt(both, 2)).toMatch(/^income, phone would enter at penalty 0\.010\. Take them or leave them/);
  });

  it('says before all else what did not converge, and where', () => {
    const status = smallPath().status.map((one, index) => (index === 5 ? 'separation' : index === 4 ? 'iteration-limit' : one));
    expect(decisionAt(smallPath({ status }), 5)).toContain('no finite optimum');
    expect(decisionAt(smallPath({ status }), 4)).toContain('did not reach its tolerance');
    const folds = smallPath({ crossValidation: { ...smallPath().crossValidation, notConverged: [2] } });
    expect(decisionAt(folds, 2)).toMatch(/^The fit of a fold at this penalty did not reach its tolerance/);
    expect(decisionAt(folds, 4)).toBeNull();
  });

  it('says when a penalty is above the one-standard-error rule', () => {
    expect(decisionAt(smallPath(), 0)).toContain('above the one-standard-error rule');
  });

  it('finds what the rules differ by', () => {
    expect(pathFinding(smallPath())).toBe(
      'One characteristic carries the model; the one that follows adds 0.0025 of deviance, inside one standard error.',
    );
  });

  it('says first when the minimum is at the end of the path', () => {
    const path = smallPath({ crossValidation: { ...smallPath().crossValidation, minimum: 5, atGridEnd: true } });
    expect(pathFinding(path)).toContain('end of the path');
  });

  it('falls back to the count where both rules keep the same', () => {
    const path = smallPath({ crossValidation: { ...smallPath().crossValidation, oneStandardError: 3 } });
    expect(pathFinding(path)).toBe('Two of 3 characteristics are kept at the smallest deviance.');
  });

  it('names the penalty under the notch by its rule', () => {
    expect(ruleAt(smallPath(), 2)).toBe('one-standard-error');
    expect(ruleAt(smallPath(), 3)).toBeNull();
    expect(notchLabel(smallPath(), 2)).toBe('one standard error: penalty 0.020');
    expect(notchLabel(smallPath(), 4)).toBe('smallest deviance: penalty 0.0050');
    expect(pathTitle(smallPath(), 1)).toBe('Lasso over 6 penalties, ten folds');
    expect(pathTitle(smallPath(), 0.5)).toContain('Elastic net (mixing 0.5');
  });

  it('say what a prior correction did, and what inference means', () => {
    expect(correctionWords(smallPath(), 2)).toBeNull();
    const path = smallPath({
      priorCorrection: { sampleBadRate: 0.3, populationBadRate: 0.05, shift: 2.0971 },
      intercepts: smallPath().intercepts.map(() => 2.9471),
    });
    // 0.85 + ln(19 x 3/7) = 2.947, as King and Zeng's formula gives in the library's docstring.
    expect(correctionWords(path, 2)).toContain(
      'from 0.850 to 2.947, from the bad rate of the fitted rows, 30.0\u202f%, to that of the population, 5.0\u202f%',
    );
    expect(correctionWords(path, 2)).toContain('reads off by about 2.10');
    expect(inferenceWords('none')).toBeNull();
    expect(inferenceWords('parcelling')).toMatch(
      /^Declined applicants enter WOE and fit by parcelling\. .*cannot be tested on accepted applicants/,
    );
  });

  it('places a label where the notch does not run through it', () => {
    const edges = { left: 100, right: 400 };
    expect(placeBeside(150, 80, edges, 120)).toEqual({ x: 156, anchor: 'start' });
    expect(placeBeside(380, 80, edges, 120)).toEqual({ x: 374, anchor: 'end' }); // no room on the right
    expect(placeBeside(250, 80, edges, 300)).toEqual({ x: 244, anchor: 'end' }); // the notch stands on the right
    expect(placeBeside(350, 90, edges, 300)).toEqual({ x: 400, anchor: 'end' }); // on the left too: at the edge
    expect(placeBeside(250, 200, edges, 250)).toBeNull();
  });

  it('finds the nearest penalty on the logarithmic axis', () => {
    expect(nearestIndex([0.1, 0.01, 0.001], 0.02)).toBe(1);
    expect(nearestIndex([0.1, 0.01, 0.001], 5)).toBe(0);
    expect(nearestIndex([0.1, 0.01, 0.001], 1e-9)).toBe(2);
  });
});
