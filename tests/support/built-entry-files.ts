import type { EntryName } from '../../server/src/running/entry-files';
import { builtFile } from './built-server';

/**
 * In place of `server/src/running/entry-files.ts` in tests: threads and processes start from the built server, as they do in an installation. From source each of
 * them would compile all of the server again, which took longer than most of the tests.
 */
export const entryFile = (name: EntryName): URL => builtFile(name);
