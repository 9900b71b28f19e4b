import type { RecordHead } from '@tallystone/contracts/record/schema';
import { Pool } from 'pg';
import { verifyChain } from '../services/record/verify';

/**
 * `verify-record [--head SEQUENCE:HASH]...`: verifies the record of actions of DATABASE_URL. Heads are those printed in documents and logs;
 * give them to find a tail that was cut. Exit 0 when the chain is intact, 1 when it cannot be read, 2 when it is not intact.
 */

const url = process.env['DATABASE_URL'];
const heads: RecordHead[] = [];
for (const [place, arg] of process.argv.entries()) {
  if (arg !== '--head') continue;
  const match = /^(\d+):([0-9a-f]{64})$/.exec(process.argv[place + 1] ?? '');
  if (!match) fail(`--head wants SEQUENCE:HASH, not ${process.argv[place + 1] ?? 'nothing'}`);
  heads.push({ sequence: Number(match[1]), hash: match[2] });
}
if (!url) fail('DATABASE_URL: is missing');

const pool = new Pool({ connectionString: url, max: 1, application_name: 'tallystone-verify-record' });
try {
  const found = await verifyChain(pool, { heads });
  for (const fault of found.faults) console.error(`${fault.kind}: ${fault.message}`);
  if (found.faultCount > found.faults.length) console.error(`… and ${found.faultCount - found.faults.length} more`);
  console.log(
    `${found.rows} entries, ${found.intact ? 'the chain is intact' : `${found.faultCount} faults`}; head ${found.head.sequence}:${found.head.hash}`,
  );
  process.exitCode = found.intact ? 0 : 2;
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
} finally {
  await pool.end();
}

function fail(message: string): never {
  console.error(message);
  process.exit(1);
}
