import { parentPort } from 'node:worker_threads';
import { help, type HelpOrder } from '@tallystone/numeric/engine/crew';
import type { FoldBatch } from '@tallystone/numeric/engine/fold-batch';
import { helpFolds } from '@tallystone/numeric/engine/help-folds';

/** The body of a helping thread: it takes pieces of a fit, or folds of a small one, from the thread that started it, through the memory they share. */

parentPort?.on('message', (order: HelpOrder | FoldBatch) => ('sheet' in order ? helpFolds(order) : help(order)));
