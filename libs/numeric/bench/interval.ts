import { informationValueInterval, type InformationValueInterval } from '../binning/information-value';
import { usualSmoothing, type BenchReading } from './reading';

/**
 * 95 % interval of the information value of the bins as they are, from development's counts. Null without a good or without a bad.
 * @example readingInterval(readBench(fine, bins))?.upper
 * Source: as `informationValueInterval`.
 */
export function readingInterval(reading: BenchReading): InformationValueInterval | null {
  const goods = reading.bins.map(({ figures }) => figures.development?.goods ?? 0);
  const bads = reading.bins.map(({ figures }) => figures.development?.bads ?? 0);
  if (!goods.some((count) => count > 0) || !bads.some((count) => count > 0)) return null;
  return informationValueInterval(goods, bads, { smoothing: usualSmoothing });
}
