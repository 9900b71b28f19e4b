import type { Handler } from '../handler';
import { verifyRecord } from './record';
import { confirmSample, readSample } from './samples';

/** Everything a worker can do. An entity adds its handlers here. */
export const handlers: readonly Handler[] = [verifyRecord, readSample, confirmSample];
