import type { ReadingChoices } from '@tallystone/contracts/samples/reading';

type DateOrder = NonNullable<ReadingChoices['dateOrder']>;

const words: Record<DateOrder, string> = {
  'year-month-day': 'Year, month, day only (2024-04-03)',
  'day-month-year': 'Day first (03/04/2024 is 3 April)',
  'month-day-year': 'Month first (04/03/2024 is 3 April)',
};

export const dateOrders = Object.keys(words) as readonly DateOrder[];

/** A date order with an example; what was read before there was a choice was read year first. */
export const orderWords = (order: DateOrder | undefined): string => words[order ?? 'year-month-day'];
