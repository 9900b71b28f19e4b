import { parentPort } from 'node:worker_threads';
import { help, type HelpOrder } from '@tallystone/numeric/engine/crew';

/** The body of a helping thread: it takes pieces of a fit from the thread that started it, through the memory they share. */

parentPort?.on('message', (order: HelpOrder) => help(order));
