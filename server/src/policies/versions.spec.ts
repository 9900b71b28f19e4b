import type { Role } from '@tallystone/contracts/people/schema';
import { describe, expect, it } from 'vitest';
import type { Actor } from '../models/person';
import { canActOnVersion, type VersionStanding } from './versions';

const person = (id: string, ...roles: Role[]): Actor => ({ id, roles }) as unknown as Actor;

const concluded: VersionStanding = {
  model: { memberIds: ['author', 'both'] },
  state: 'In validation',
  developedBy: new Set(['author']),
  submittedBy: 'author',
  validators: new Set(['starter', 'concluder']),
  concluded: true,
  erased: null,
} as unknown as VersionStanding;

const accepts = (who: Actor, version = concluded): boolean => canActOnVersion(who, version, 'accept').allowed;

describe('the second signature', () => {
  it('is for compliance, once the validator has concluded', () => {
    expect(accepts(person('clerk', 'compliance'))).toBe(true);
    expect(accepts(person('clerk', 'compliance'), { ...concluded, concluded: false })).toBe(false);
    expect(accepts(person('clerk', 'validator', 'modeller'))).toBe(false);
  });

  it('is nobody’s who developed the version, whatever else they are', () => {
    expect(canActOnVersion(person('author', 'modeller', 'compliance'), concluded, 'accept')).toMatchObject({
      allowed: false,
      reason: 'You took part in developing this version: someone else has to sign it.',
    });
    expect(canActOnVersion(person('author', 'modeller', 'compliance'), concluded, 'return').allowed).toBe(false);
  });

  it('is nobody’s who took it into validation or concluded', () => {
    for (const id of ['starter', 'concluder'])
      expect(canActOnVersion(person(id, 'validator', 'compliance'), concluded, 'accept')).toMatchObject({
        allowed: false,
        reason: 'You validated this version: someone else has to sign it for compliance.',
      });
  });
});

describe('validation', () => {
  it('is nobody’s who developed the version, whatever else they are', () => {
    const submitted = { ...concluded, state: 'Submitted', concluded: false } as const;
    expect(canActOnVersion(person('author', 'modeller', 'validator'), submitted, 'start').allowed).toBe(false);
    expect(canActOnVersion(person('other', 'validator'), submitted, 'start').allowed).toBe(true);
  });
});

describe('withdrawing', () => {
  const waiting = {
    ...concluded,
    concluded: false,
    model: { memberIds: ['author', 'both', 'sender'] },
    submittedBy: 'sender',
  } as unknown as VersionStanding;

  it('is for its modellers until the validator concludes', () => {
    for (const id of ['author', 'sender']) {
      expect(canActOnVersion(person(id, 'modeller'), waiting, 'withdraw').allowed).toBe(true);
      expect(canActOnVersion(person(id, 'modeller'), { ...waiting, concluded: true }, 'withdraw').allowed).toBe(false);
    }
    expect(canActOnVersion(person('both', 'modeller'), waiting, 'withdraw')).toMatchObject({
      allowed: false,
      reason: 'You had no hand in this version: whoever developed or submitted it can withdraw it.',
    });
    expect(canActOnVersion(person('stranger', 'modeller'), waiting, 'withdraw').allowed).toBe(false);
    expect(canActOnVersion(person('both', 'validator'), waiting, 'withdraw').allowed).toBe(false);
  });
});
