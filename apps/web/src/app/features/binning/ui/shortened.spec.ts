import { shortened } from './shortened';

const short = (names: readonly string[], room: number): (string | undefined)[] => {
  const found = shortened(names, room);
  return names.map((name) => found.get(name));
};

describe('shortened names', () => {
  it('tell apart names with the same beginning', () => {
    const jobs = Array.from({ length: 60 }, (_, place) => `Job of kind ${String(place + 1).padStart(2, '0')}`);
    for (const room of [4, 5, 8]) {
      const found = short(jobs, room);
      expect(new Set(found).size).toBe(60);
      expect(Math.max(...found.map((name) => name!.length))).toBeLessThanOrEqual(room);
    }
    expect(short(jobs, 4)[16]).toBe('J…17');
    expect(short(['Driver of lorries', 'Driver of buses'], 9)).toEqual(['Dr…orries', 'Dr…buses']);
  });

  it('keep the beginning where that is enough, and names that have room', () => {
    expect(short(['Pensioner', 'Student', 'none'], 5)).toEqual(['Pens…', 'Stud…', 'none']);
    expect(short(['Self employed', 'Student'], 6)).toEqual(['Self…', 'Stude…']);
    expect(short(['Pensioner', 'Job 17', 'Job 18'], 4)).toEqual(['Pen…', 'J…17', 'J…18']);
  });

  it('cut between signs', () => {
    expect(short(['👩‍🌾', 'né à Brest, 1', 'né à Brest, 2'], 5)).toEqual(['👩‍🌾', 'n…, 1', 'n…, 2']);
  });
});
