import { frozen } from '../testing/version';
import { conditionsOf } from './conclude-dialog';
import { linkOf } from './gate-list';
import { decisionOf } from '../pages/version-acts';
import { gateAhead, gateWords, mergeTexts, missing, reviewsFinding, versionFinding, versionsFinding } from './version-view';

describe('the gate ahead', () => {
  it('is that of the next act', () => {
    expect(gateAhead(frozen)?.act).toBe('submit');
    expect(gateAhead({ ...frozen, state: 'In validation' })?.act).toBe('conclude');
    expect(gateAhead({ ...frozen, state: 'In validation', awaitingCompliance: true })?.act).toBe('accept');
    expect(gateAhead({ ...frozen, state: 'Approved' })).toBeNull();
  });
  it('counts what is missing', () => {
    const gate = frozen.gates[0];
    expect(missing(gate).map(({ code }) => code)).toEqual(['reason-texts', 'monitoring-plan']);
    expect(gateWords(gate)).toBe('2 of 3 are missing.');
    expect(gateWords({ ...gate, items: gate.items.slice(0, 2) })).toBe('1 of 2 is missing.');
    expect(gateWords(frozen.gates[1])).toBe('What is needed is there.');
  });
  it('leads to places with their query', () => {
    expect(linkOf('/models/m1/scorecard?fit=f1')).toEqual({ path: '/models/m1/scorecard', query: { fit: 'f1' } });
    expect(linkOf('/models/m1')).toEqual({ path: '/models/m1', query: {} });
  });
});

describe('the sentence of a version', () => {
  const begin = '8 characteristics of fit “Lasso” at penalty 0.0095, frozen 3\u00A0November\u00A02026 by Marian.';
  it('says what is missing, else for whom it waits', () => {
    expect(versionFinding(frozen)).toBe(`${begin} 2 things are missing before it can go on.`);
    expect(versionFinding({ ...frozen, state: 'Submitted', waitingFor: 'a validator to start' })).toBe(`${begin} It waits for a validator to start.`);
  });
  it('says when it was returned, and how it ended', () => {
    expect(versionFinding({ ...frozen, returned: true })).toBe(`${begin} Compliance has returned it for its texts.`);
    const accepted = { ...frozen.acts[0], act: 'accept' as const, by: 'Conrad' };
    expect(versionFinding({ ...frozen, state: 'Approved', waitingFor: null, acts: [...frozen.acts, accepted] })).toBe(`${begin} Documentation accepted by Conrad.`);
  });
});

describe('lists of versions', () => {
  it('name the latest', () => {
    expect(versionsFinding([])).toBeNull();
    expect(versionsFinding([frozen])).toBe('Version 2 is the latest: in development, and waits for its modeller to submit.');
  });
  it('count for whom reviews wait, most first', () => {
    const waits = (waitingFor: string | null) => ({ ...frozen, waitingFor });
    expect(reviewsFinding([waits('a validator to start'), waits('compliance to sign'), waits('compliance to sign')])).toBe(
      '3 versions under review: 2 wait for compliance to sign, 1 waits for a validator to start.',
    );
    expect(reviewsFinding([])).toBeNull();
  });
});

describe('what a person decides', () => {
  it('follows their abilities, and what is missing goes first', () => {
    expect(decisionOf(frozen, 2)).toBe('First the 2 things missing below.');
    expect(decisionOf(frozen, 0)).toContain('Submit it');
    expect(decisionOf({ ...frozen, abilities: ['accept', 'return'] }, 0)).toContain('accept it or return it');
    expect(decisionOf({ ...frozen, abilities: [] }, 0)).toBeNull();
  });
  it('takes conditions one a line', () => {
    expect(conditionsOf(' Review after a year\n\n Cap at 10,000 \n')).toEqual(['Review after a year', 'Cap at 10,000']);
  });
});

describe('texts that two people wrote at once', () => {
  it('merge where only one changed a section', () => {
    const merged = mergeTexts({ limitations: 'a' }, { limitations: 'a', monitoringPlan: 'theirs' }, { limitations: 'mine' });
    expect(merged).toEqual({ texts: { limitations: 'mine', monitoringPlan: 'theirs' }, conflicts: [] });
  });
  it('stand against each other where both changed one differently', () => {
    const merged = mergeTexts({ limitations: 'a' }, { limitations: 'b' }, { limitations: 'c' });
    expect(merged.conflicts).toEqual([{ key: 'limitations', theirs: 'b', mine: 'c' }]);
    expect(merged.texts).toEqual({ limitations: 'c' });
    expect(mergeTexts({}, { limitations: 'b' }, { limitations: 'b' }).conflicts).toEqual([]);
  });
  it('let an emptied section be empty', () => {
    expect(mergeTexts({ limitations: 'a' }, { limitations: 'a' }, {})).toEqual({ texts: {}, conflicts: [] });
  });
});
