import { canDevelopModel, canReadModel } from './models';

/** Whether a cover was lifted, by whom and why, is read by all who read the model; it is lifted by those who develop it. */
export const canReadOutOfTime = canReadModel;
export const canOpenOutOfTime = canDevelopModel;
