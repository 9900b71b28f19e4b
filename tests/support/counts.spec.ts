import { describe, expect, it } from 'vitest';
import { countPlaywright, countVitest } from '../../tools/checks.mjs';

const file = (status: string, ...states: string[]) => ({
  name: '/somewhere/a.spec.ts',
  status,
  assertionResults: states.map((state, index) => ({ status: state, fullName: `test ${index}` })),
});

describe('what npm test counts', () => {
  it('takes passed, failed and skipped tests from a report of Vitest', () => {
    const report = { testResults: [file('failed', 'passed', 'failed', 'skipped'), file('passed', 'passed', 'todo')] };
    expect(countVitest({ code: 1 }, report)).toMatchObject({ passed: 2, failed: 1, skipped: 2 });
  });

  it('counts a file that could not run as a failure', () => {
    expect(countVitest({ code: 1 }, { testResults: [file('failed'), file('passed', 'passed')] })).toMatchObject({
      passed: 1,
      failed: 1,
    });
  });

  it('counts an error outside of every test as a failure', () => {
    expect(countVitest({ code: 1 }, { testResults: [file('passed', 'passed')] })).toMatchObject({ passed: 1, failed: 1 });
  });

  it('does not take nothing for success', () => {
    expect(countVitest({ code: 0 }, { testResults: [] })).toMatchObject({ passed: 0, failed: 1 });
    expect(countVitest({ code: 0 }, undefined)).toMatchObject({ failed: 1 });
    expect(countPlaywright({ code: 0 }, { stats: { expected: 0, unexpected: 0, flaky: 0, skipped: 0 } })).toMatchObject({
      failed: 1,
    });
    expect(countPlaywright({ code: 0 }, undefined)).toMatchObject({ failed: 1 });
  });

  it('takes a browser test that passed at a second try for a failure', () => {
    const report = { stats: { expected: 3, unexpected: 0, flaky: 1, skipped: 1 } };
    expect(countPlaywright({ code: 0 }, report)).toMatchObject({ passed: 3, failed: 1, skipped: 1 });
  });

  it('counts a browser run that broke off before its tests as a failure', () => {
    const report = {
      stats: { expected: 0, unexpected: 0, flaky: 0, skipped: 0 },
      errors: [{ message: 'The server did not start\nat …' }],
    };
    expect(countPlaywright({ code: 1 }, report)).toEqual({
      passed: 0,
      failed: 1,
      skipped: 0,
      notes: ['The server did not start'],
    });
  });
});
