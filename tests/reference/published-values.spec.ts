import { describe, expect, it } from 'vitest';
import { fitChecks } from './published-fits';
import { scoreChecks } from './published-scores';
import { run, type PublishedCheck } from './published-values';
import { expectAllRead, expected } from './reference-files';

// Source: expected/published_values_and_identities.json; each entry names its paper or book and says whether a figure was read or recalled from
// memory. The functions beside repeat that in a comment.
const { checks } = expected<{ checks: PublishedCheck[] }>('published_values_and_identities.json');
const handlers = { ...scoreChecks, ...fitChecks };

describe('published values and exact identities', () => {
  it('covers all 39', () => {
    expect(checks).toHaveLength(39);
    expect(Object.keys(handlers).sort()).toEqual(checks.map(({ id }) => id).sort());
  });
  it.each(checks)('$id', (check) => run(handlers[check.id], check));
});

it('reads every figure of the file', () =>
  expectAllRead('published_values_and_identities.json', {
    'checks/*/expected/wald/*': "Wald's interval is not offered: it fails near 0",
    'checks/*/newton/*': 'the same identity found by another program',
    'checks/*/inputs/alpha': 'ridge, as the entry says in words',
    'checks/*/expected/max_abs_difference_found': 'by another program',
  }));
