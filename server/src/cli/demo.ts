import { readConfig } from '../config/environment';
import { openContext } from '../context';
import { demoPeople, ensureDemoPeople } from '../demo/people';
import { createLog } from '../logging/log';
import { stopThreads } from '../threads/run-in-thread';

/**
 * `demo`: makes the demo of Saltmarsh Mutual, each part only when it is missing, and prints as its last line the JSON
 * `{ "signIns": [{ "role", "email", "password" }] }`. Further parts of the demo are made here, after the people, in their order.
 */

const config = readConfig(process.env);
const context = await openContext(config, createLog(config.logLevel === 'info' ? 'warn' : config.logLevel));
try {
  await ensureDemoPeople(context);
  console.log(JSON.stringify({ signIns: demoPeople.map(({ role, email, password }) => ({ role, email, password })) }));
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
} finally {
  await stopThreads();
  await context.close();
}
