import { describe, expect, it } from 'vitest';
import { refusalOf } from './blocklist';

const person = ['Mara Modeller', 'modeller@saltmarsh.example'];

describe('the blocklist', () => {
  it.each([
    ['passwordpassword', 'guessed first'],
    ['P@ssw0rd2024!!!!', 'guessed first'],
    ['Welcome-Welcome-1', 'guessed first'],
    ['MaraModeller2025', 'guessed first'],
    ['saltmarsh-saltmarsh', 'guessed first'],
    ['tallystone-admin-2026', 'guessed first'],
    ['qwertyuiopasdfgh', 'guessed first'],
    ['yxcvbnm,0987654321', 'neighbouring'],
    ['123451234512345', 'over and over'],
    ['abcabcabcabcabcabc', 'over and over'],
    ['zzzzzzzzzzzzzzzz', 'over and over'],
    ['aabbaabbccaabbccaa', 'too few'],
    ['Correct Horse Battery Staple', 'tried first'],
  ])('refuses %s and says why', (password, why) => {
    expect(refusalOf(password, person)).toContain(why);
  });

  it.each([
    'tide-pools-at-noon',
    'herons over the flats',
    'vier Möwen auf dem Deich',
    '雨の日は図書館で本を読むことにしている',
    'kT9$wq2LmZx7#vBn',
    'password but with a longer story of my own',
  ])('accepts %s', (password) => {
    expect(refusalOf(password, person)).toBeNull();
  });
});
