/**
 * The light tokens of the look, on white paper: a document is printed more often than a screen is. Good and bad are told apart by place (goods above,
 * bads below) and by tone (the bad one is the darker in grey).
 */
export const colour = {
  paper: '#F7F4EE',
  surface: '#FFFDF9',
  sunk: '#EFEBE2',
  hairline: '#D8D1C3',
  ink: '#1E2328',
  ink2: '#565B60',
  primary: '#1F5F57',
  container: '#D6E9E4',
  ochreText: '#8A5A0B',
  ochre: '#B07A1E',
  good: '#1F6F8B',
  bad: '#A94A22',
  indeterminate: '#6B6A62',
} as const;

/** A4 in points, and the frame of the text. */
export const page = { width: 595.28, height: 841.89, left: 56, right: 56, top: 60, bottom: 72 } as const;
export const textWidth = page.width - page.left - page.right;
export const textBottom = page.height - page.bottom;

export const type = {
  body: { size: 9.5, leading: 13.5 },
  small: { size: 8, leading: 11 },
  caption: { size: 9, leading: 12 },
  table: { size: 8, leading: 10.5 },
  axis: { size: 7, leading: 9 },
  section: { size: 19, leading: 24 },
  heading: { size: 11.5, leading: 15 },
} as const;
