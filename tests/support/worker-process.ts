import { readConfig } from '../../server/src/config/environment';
import { openContext } from '../../server/src/context';
import { startWorker } from '../../server/src/jobs/worker';
import { createLog } from '../../server/src/logging/log';
import { counting } from './counting-job';

/** A worker in a process of its own, for tests that kill or freeze it. Says 'ready' over IPC. */
const config = readConfig(process.env);
const context = await openContext(config, createLog(config.logLevel));
await startWorker(context, [counting]);
process.send?.('ready');
process.on('disconnect', () => process.exit(0));
