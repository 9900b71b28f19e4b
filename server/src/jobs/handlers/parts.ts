import { resampleBatch } from '../../services/validation/stability';
import { resamplePart } from '../definitions/parts';
import { type PartHandler, handlePart } from '../parts/handler';

const resampleVersion = handlePart(resamplePart, (payload, { context, signal }) => resampleBatch(context, payload, signal));

/** Every part that a worker can do. */
export const partHandlers: readonly PartHandler[] = [resampleVersion];
