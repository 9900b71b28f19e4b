import { home, utilisation } from '../testing/characteristics';
import { asPart, filtered, riskTrend, warningsOf } from './characteristic-filter';

const list = [
  utilisation,
  { ...home, included: false, leftOutReason: 'no use' },
  {
    ...utilisation,
    id: 'x',
    column: 'Income',
    edits: 2,
    editsWithoutReason: 1,
    warnings: [{ code: 'small-bin' as const, message: '', bins: [0] }],
  },
];

describe('the list of characteristics', () => {
  it('shows the part and the names that are asked for', () => {
    const names = (part: Parameters<typeof filtered>[1], search = ''): string[] =>
      filtered(list, part, search).map(({ column }) => column);
    expect(names('all')).toEqual(['utilisation', 'home', 'Income']);
    expect(names('included')).toEqual(['utilisation', 'Income']);
    expect(names('left-out')).toEqual(['home']);
    expect(names('warnings')).toEqual(['Income']);
    expect(names('edited')).toEqual(['Income']);
    expect(names('unexplained', 'util')).toEqual([]);
    expect(names('all', ' INC ')).toEqual(['Income']);
  });

  it('searches what the dictionary calls a column as well as its name', () => {
    const labels = new Map([['utilisation', 'Share of the limit that is drawn']]);
    const names = (search: string): string[] => filtered(list, 'all', search, labels).map(({ column }) => column);
    expect(names('the LIMIT')).toEqual(['utilisation']);
    expect(names('util')).toEqual(['utilisation']);
    expect(names('nowhere')).toEqual([]);
  });

  it('reads the part from the address and takes what it does not know as all', () => {
    expect(asPart('left-out')).toBe('left-out');
    expect(asPart('nonsense')).toBe('all');
    expect(asPart(undefined)).toBe('all');
  });

  it('words warnings, and risk against WOE', () => {
    expect(warningsOf(list[2])).toBe('small bin');
    expect(riskTrend.falling).toBe('rises');
  });
});
