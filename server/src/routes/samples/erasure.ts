import * as endpoints from '@tallystone/contracts/samples/endpoints';
import { canEraseSample, canListKept } from '../../policies/samples';
import { findModel } from '../../services/models/find-model';
import { eraseSample } from '../../services/samples/erasure/erase';
import { keptSamples } from '../../services/samples/erasure/kept';
import { findSample } from '../../services/samples/find-sample';
import { type Route, defineRoute } from '../http/route';

/** Retention: what is kept of applicants, and erasing it. */
export function erasureRoutes(): Route[] {
  return [
    defineRoute(endpoints.listKeptSamples, {
      access: 'signed-in',
      find: ({ context, params }) => findModel(context.sequelize, params.modelId),
      authorise: ({ person, subject }) => canListKept(person, subject),
      act: ({ context, person, subject }) => keptSamples(context.sequelize, subject, person),
    }),
    defineRoute(endpoints.eraseSample, {
      access: 'signed-in',
      // Not locked: what runs on it is held first.
      find: ({ context, params, tx }) => findSample(context.sequelize, params.modelId, params.sampleId, tx),
      authorise: ({ person, subject }) => canEraseSample(person, subject),
      async act({ context, person, subject, body, tx }) {
        await eraseSample(context, tx, person, subject, body);
        return undefined;
      },
    }),
  ];
}
