import { z } from 'zod';
import { binningEvents } from '../binnings/record-events';
import { documentEvents } from '../documents/record-events';
import { fitEvents } from '../fits/record-events';
import { modelEvents } from '../models/record-events';
import { outOfTimeEvents } from '../out-of-time/record-events';
import { permissionEvents } from '../permissions/record-events';
import { peopleEvents } from '../people/record-events';
import { runEvents } from '../runs/record-events';
import { sampleEvents } from '../samples/record-events';
import { scorecardEvents } from '../scorecards/record-events';
import { sessionEvents } from '../session/record-events';
import { validationEvents } from '../validation/record-events';
import { versionEvents } from '../versions/record-events';
import { recordEvents } from './record-events';

/**
 * Every act the record knows. An entity adds its list here: nothing else is accepted by `appendRecord`.
 */
export const RecordEvent = z.discriminatedUnion('action', [...sessionEvents, ...peopleEvents, ...runEvents, ...recordEvents, ...outOfTimeEvents, ...permissionEvents, ...modelEvents, ...sampleEvents, ...binningEvents, ...fitEvents, ...scorecardEvents, ...versionEvents, ...validationEvents, ...documentEvents]);
export type RecordEvent = z.input<typeof RecordEvent>;

export const recordActions: readonly string[] = RecordEvent.options.map((option) => option.shape.action.value);
