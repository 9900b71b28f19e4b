/**
 * Names in at most so many signs: cut at their ends, and those in the middle that would be alike without their ends.
 * @example shortened(['Job 17', 'Job 18', 'Pensioner'], 4) // 'J…17', 'J…18', 'Pen…'
 */
export function shortened(names: readonly string[], room: number): ReadonlyMap<string, string> {
  const signs = new Map(names.map((name) => [name, [...name]]));
  const atEnd = ([...all]: readonly string[]): string =>
    all.length > room
      ? `${all
          .slice(0, room - 1)
          .join('')
          .trimEnd()}…`
      : all.join('');
  const alike = new Map<string, number>();
  for (const all of signs.values()) alike.set(atEnd(all), (alike.get(atEnd(all)) ?? 0) + 1);
  const tail = Math.ceil(((room - 1) * 2) / 3);
  const inMiddle = (all: readonly string[]): string =>
    `${all.slice(0, room - 1 - tail).join('')}…${all
      .slice(all.length - tail)
      .join('')
      .trimStart()}`;
  return new Map(
    [...signs].map(([name, all]) => [name, all.length > room && (alike.get(atEnd(all)) ?? 0) > 1 ? inMiddle(all) : atEnd(all)]),
  );
}
