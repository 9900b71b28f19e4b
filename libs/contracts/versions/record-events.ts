import { z } from 'zod';
import { ModelState } from '../models/schema';
import { recordEvent } from '../record/event';
import { Conclusion, VersionTextKey } from './schema';

const number = z.strictObject({ version: z.int() });
const State = z.strictObject({ state: ModelState });

const act = <const A extends string>(action: A) =>
  recordEvent(action, 'version', { before: State, after: State, detail: number, reason: z.string() });

export const versionEvents = [
  recordEvent('version.frozen', 'version', {
    after: z.strictObject({ version: z.int(), fingerprint: z.string(), specificationSha256: z.string(), resultSha256: z.string(), dataSha256: z.string() }),
    reason: z.string(),
  }),
  act('version.submitted'),
  act('version.withdrawn'),
  act('version.validation-started'),
  recordEvent('version.concluded', 'version', {
    before: State,
    after: State,
    detail: z.strictObject({ version: z.int(), conclusion: Conclusion, conditions: z.array(z.string()) }),
    reason: z.string(),
  }),
  act('version.documentation-accepted'),
  act('version.documentation-returned'),
  recordEvent('version.texts-changed', 'version', {
    detail: z.strictObject({ version: z.int(), texts: z.array(VersionTextKey) }),
  }),
] as const;
