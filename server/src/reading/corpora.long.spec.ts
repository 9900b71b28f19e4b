import { afterAll, describe, expect } from 'vitest';
import { testGeneratedFiles } from './testing/generated-files';

/** The generated files of corpora.spec.ts, 10,000 of each kind, within 512 MB for all of them. */

// The most that this process has ever held, in KiB.
afterAll(() => expect(process.resourceUsage().maxRSS / 1024).toBeLessThan(512));

describe('10,000 generated files of each kind', { timeout: 20 * 60_000 }, () => testGeneratedFiles(10_000));
