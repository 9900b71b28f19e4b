/**
 * What an applicant is told of a characteristic, or '' where nothing was written. Columns are called as a file calls them: one named
 * "constructor" has no text because every object has a property of that name.
 *
 * @example reasonTextOf({ age: 'Length of life so far' }, 'constructor') // ''
 */
export const reasonTextOf = (texts: Readonly<Record<string, string>>, column: string): string =>
  Object.hasOwn(texts, column) ? texts[column].trim() : '';
