/** Stands where nobody has said yet what a code means: a draft may hold it, a definition never does. */
export const unnamedCode = 'meaning to be stated';
