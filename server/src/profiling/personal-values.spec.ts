import { describe, expect, it } from 'vitest';
import { PersonalValues, isIban, passesLuhn } from './personal-values';

const found = (...texts: string[]): string[] => {
  const values = new PersonalValues();
  for (const text of texts) values.add(text, 1);
  return values.found().map(({ kind }) => kind);
};

describe('check digits', () => {
  // The examples of the IBAN registry (ISO 13616): United Kingdom, Germany, Norway (the shortest), Malta (31 characters); from memory.
  it.each(['GB29NWBK60161331926819', 'DE89370400440532013000', 'NO9386011117947', 'MT84MALT011000012345MTLCAST001S'])(
    '%s is an IBAN, and is none with two digits swapped',
    (iban) => {
      expect(isIban(iban)).toBe(true);
      expect(isIban(iban.replace(/(.{4})/g, '$1 ').trim())).toBe(true);
      const swapped = iban.replace(/(\d)(?!\1)(\d)/, '$2$1');
      expect(swapped).not.toBe(iban);
      expect(isIban(swapped)).toBe(false);
    },
  );

  // Numbers that card schemes set aside for tests (from memory).
  it.each(['4111111111111111', '5500-0000-0000-0004', '3400 000000 00009', '2223000048400011'])(
    '%s passes, and does not with its last digit changed',
    (number) => {
      expect(passesLuhn(number)).toBe(true);
      for (let step = 1; step < 10; step++)
        expect(passesLuhn(number.slice(0, -1) + String((Number(number.at(-1)) + step) % 10))).toBe(false);
    },
  );
});

describe('personal data in values', () => {
  it.each([
    ['an address alone', 'ada.reed+loans@saltmarsh.example', 'e-mail addresses'],
    ['an address within a note', 'called twice, then wrote to ada@mail.saltmarsh.example.', 'e-mail addresses'],
    ['an IBAN', 'GB29NWBK60161331926819', 'bank accounts (IBAN)'],
    ['an IBAN on paper', 'pays from DE89 3704 0044 0532 0130 00 monthly', 'bank accounts (IBAN)'],
    ['a card', '4111111111111111', 'payment cards'],
    ['a card in groups', 'card 5500 0000 0000 0004, expired', 'payment cards'],
    ['a card of fifteen digits', '3400-000000-00009', 'payment cards'],
    // Invented; the example of HMRC has the prefix QQ, which is not given out.
    ['a National Insurance number', 'AB123456C', 'National Insurance numbers'],
    ['one in pairs', 'NI no. AB 12 34 56 C', 'National Insurance numbers'],
    ['a Social Security number', '123-45-6789', 'US Social Security numbers'],
    // Examples of the issuing authorities, or of their documentation; from memory.
    ['a Spanish DNI', '12345678Z', 'Spanish identity numbers'],
    ['a NIE within a text', 'holder X-1234567-L, renewed', 'Spanish identity numbers'],
    ['an Italian tax code', 'RSSMRA85T10A562S', 'Italian tax codes'],
    ['a PESEL', '44051401359', 'Polish identity numbers'],
    ['a German tax number', '86 095 742 719', 'German tax numbers'],
    ['a French number with its key', '2 55 08 14 168 025 38', 'French social security numbers'],
    ['a Swedish number', '811218-9876', 'Swedish identity numbers'],
    ['a Swiss number', '756.9217.0769.85', 'Swiss social security numbers'],
    ['a Brazilian number', '529.982.247-25', 'Brazilian tax numbers'],
    ['a Canadian number', 'SIN 046-454-286', 'Canadian social insurance numbers'],
    ['an Indian number', '9999 4105 7058', 'Indian identity numbers'],
    // Of the numbers that Ofcom sets aside for drama.
    ['a telephone number', '+44 7700 900123', 'telephone numbers'],
    ['one in one piece', '+447700900123', 'telephone numbers'],
    ['one with an area code', 'ring +1 (202) 555-0143 after six', 'telephone numbers'],
  ])('%s is found', (_what, text, kind) => {
    expect(found(text)).toEqual([kind]);
  });

  it.each([
    ['years', ['1998', '2004', '2024']],
    [
      'amounts',
      [
        '1200.50',
        '1,234,567.89',
        '123456789.12',
        '-250000',
        '4111111111111111.25',
        '0.4111111111111111',
        '+1234567',
        '+12345678.90',
      ],
    ],
    ['dates', ['2024-03-01', '01/03/2024', '20240301', '2024-03-01T10:15:00', '2024-03-01 10:15:00.123', '01-03-2024']],
    ['moments', ['1709287200', '1709287200000', '20240301101500', '2024-03-01 10:15:00+01:00', '2024-03-01 10:15:00 +0100']],
    ['branch codes', ['60-16-13', 'BR-00412', '601613', 'GB-LND-0042', 'AB 1234', 'NW10 7DN', 'SW1A 1AA']],
    [
      'application numbers',
      ['SM-1000001', 'SM-2024-000123', 'A1234567', 'LN2024000123456', 'b2c1d7e8-5a44-4f6e-9a0b-12f3a4b5c6d7'],
    ],
    ['words with an @', ['5 @ 20', '@saltmarsh', 'loan@', 'rate @ 4.9 %', 'a@b']],
    ['prefixes that are not given out', ['BG123456A', 'ZZ123456A', 'DA123456A', 'AO123456A', 'AB123456E', 'QQ123456C']],
    ['areas that are not given out', ['000-12-3456', '666-12-3456', '912-34-5678', '123-00-4567', '123-45-0000']],
    ['numbers without their plus sign', ['07700 900123', '447700900123']],
    ['wrong check digits', ['GB28NWBK60161331926819', '4111111111111112']],
    ['national numbers with another last character', ['12345678A', 'RSSMRA85T10A562T', '44051401358', '86095742710', '255081416802539', '811218-9875']],
    ['those with separators', ['756.9217.0769.84', '529.982.247-26', '111.111.111-11', '046-454-287', '9999 4105 7059']],
  ])('%s are not', (_what, texts) => {
    expect(found(...texts)).toEqual([]);
  });

  it('numbers of which one in ten passes are account numbers, not cards', () => {
    // A thousand of them in a row: a hundred pass Luhn's check, whichever they are.
    const accounts = Array.from({ length: 1000 }, (_, k) => String(4_000_120_000_000_000 + k * 7));
    expect(accounts.filter((number) => passesLuhn(number)).length).toBeGreaterThan(50);
    expect(found(...accounts)).toEqual([]);
  });

  it('counts rows, the most frequent kind first, with the standard of each', () => {
    const values = new PersonalValues();
    values.add('no contact', 900);
    values.add('wrote from ada@saltmarsh.example and bob@saltmarsh.example', 2);
    values.add('rang from +44 7700 900123', 3);
    values.add('+44 7700 900456 or eve@saltmarsh.example', 4);
    expect(values.found()).toEqual([
      { kind: 'telephone numbers', standard: 'ITU-T E.164', rows: 7, asNumbers: true },
      { kind: 'e-mail addresses', standard: 'RFC 5322, section 3.4.1', rows: 6, asNumbers: false },
    ]);
  });
});
