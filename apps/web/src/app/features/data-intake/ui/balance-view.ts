import type { CharacteristicBalance } from '@tallystone/contracts/samples/balance';
import { largerReading } from '@tallystone/contracts/samples/balance-reading';
import { DASH, binWords, share } from '../../../ui/numbers';

/** "rent: 31.0 % against 24.0 %": what moved most, in the partition with the larger index. */
export function movedMost(characteristic: CharacteristicBalance): string {
  const largest = largerReading(characteristic)?.largest;
  return largest ? `${binWords(largest.label)}: ${share(largest.compared)} against ${share(largest.development)}` : DASH;
}
