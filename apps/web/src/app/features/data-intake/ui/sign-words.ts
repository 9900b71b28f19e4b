const names: Readonly<Record<string, string>> = {
  ',': 'comma',
  ';': 'semicolon',
  '\t': 'tab',
  '|': 'vertical bar',
  '.': 'point',
  ' ': 'blank',
  '\u00A0': 'no-break blank',
  '\u202F': 'narrow no-break blank',
  "'": 'apostrophe',
};

/** A sign that parts fields, decimals or thousands, by its name: alone it would hardly be seen. */
export const signWords = (sign: string | null | undefined): string => (sign ? (names[sign] ?? sign) : 'none');
