/** Whole numbers with a narrow no-break space between thousands. */
export const thin = (value: number): string => String(value).replace(/\B(?=(\d{3})+(?!\d))/g, '\u202f');
