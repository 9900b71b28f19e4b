import { readConfig } from '../config/environment';
import { openContext } from '../context';
import { ensureDemoBinning } from '../demo/binnings';
import { ensureDemoFits } from '../demo/fits';
import { ensureDemoAnswers } from '../demo/flags';
import { ensureDemoModel } from '../demo/models';
import { demoPeople, ensureDemoPeople } from '../demo/people';
import { stopDemoWorker } from '../demo/run-to-end';
import { ensureDemoSample } from '../demo/samples';
import { ensureDemoVersion } from '../demo/versions';
import { createLog } from '../logging/log';
import { stopThreads } from '../threads/run-in-thread';

/**
 * `demo`: makes the demo of Saltmarsh Mutual, each part only when it is missing, and prints as its last line the JSON
 * `{ "signIns": [{ "role", "email", "password" }] }`. Further parts of the demo are made here, after the people, in their order.
 */

const config = readConfig(process.env);
const context = await openContext(config, createLog(config.logLevel === 'info' ? 'warn' : config.logLevel));
try {
  const people = await ensureDemoPeople(context);
  const model = await ensureDemoModel(context, people.modeller);
  const sample = await ensureDemoSample(context, model, people.modeller);
  const { binningId } = await ensureDemoBinning(context, model, people.modeller, sample.definitionId);
  const fit = await ensureDemoFits(context, model, people.modeller, binningId);
  await ensureDemoAnswers(context, model, people.modeller, sample);
  await ensureDemoVersion(context, fit, people.modeller);
  console.log(JSON.stringify({ signIns: demoPeople.map(({ role, email, password }) => ({ role, email, password })) }));
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 1;
} finally {
  await stopDemoWorker();
  await stopThreads();
  await context.close();
}
