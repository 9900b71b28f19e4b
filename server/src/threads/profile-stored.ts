import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { profileHashes } from '../profiling/hashed-column';
import { type OutcomeCodes, suspectLeakage } from '../profiling/leakage';
import { profileNumbers } from '../profiling/number-column';
import type { Personal } from '../profiling/personal';
import { profileColumn } from '../profiling/profile-column';
import { numberReader } from '../reading/index';
import { joinSegments } from '../storage/joinSegments';
import { packedForm, textsOfUnpacked, unpack } from '../storage/packedSegment';
import { decodeTexts, inflateSegment } from '../storage/segmentCoding';
import type { Task } from './task';

export interface ProfilePayload {
  readonly name: string;
  readonly position: number;
  /** The segments of the column as they are stored. */
  readonly contents: readonly Uint8Array[];
  readonly choices: ReadingChoices;
  readonly personal: Personal | null;
  /** Of identifiers: how many there are when it does not count how they are written; null where that was not counted. */
  readonly writings: number | null;
  /** Null as long as it is not known: nothing is then said of leakage. */
  readonly outcome: OutcomeCodes | null;
}

/** What the quality table says of one stored column, leakage included. */
export const profileStored: Task<ProfilePayload, ColumnProfile> = (payload) => {
  const { name, position, contents, choices, personal, writings, outcome } = payload;
  const segments = contents.map((content) => {
    const bytes = inflateSegment(content);
    return bytes[0] === packedForm ? unpack(bytes) : decodeTexts(bytes);
  });
  const unpacked = segments.filter((segment) => 'cells' in segment);
  if (unpacked.length === segments.length) {
    const profile = personal
      ? profileHashes(name, position, unpacked, choices, personal, writings)
      : profileNumbers(name, position, unpacked, choices, outcome);
    if (profile) return profile;
  }
  const column = joinSegments(segments.map((segment) => ('cells' in segment ? textsOfUnpacked(segment) : segment)));
  const profile = profileColumn(name, position, column, choices, personal, writings);
  if (outcome && profile.suggestedRole === 'characteristic') {
    const missing = new Set(['', ...choices.missing]);
    const reader = profile.kind === 'numeric' ? numberReader(choices) : null;
    const flag = suspectLeakage(column, (text) => missing.has(text), outcome, reader);
    if (flag) profile.flags.push(flag);
  }
  return profile;
};
