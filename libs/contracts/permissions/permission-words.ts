import type { Specification } from '../specification/types';

/** Why a protected column is kept apart, and who can change that: said wherever it is barred. */
export const barredWords = (column: string): string =>
  `"${column}" is protected: barred until somebody with the role of compliance permits it, with a citation, on the definition of the sample.`;

/** Who permitted which protected characteristics, a line for each. */
export const permissionLines = ({ permissions }: Pick<Specification, 'permissions'>): string[] =>
  (permissions ?? []).map(({ column, citation, by, at }) => `"${column}" is protected and permitted by ${by} on ${at.slice(0, 10)}: ${citation}`);
