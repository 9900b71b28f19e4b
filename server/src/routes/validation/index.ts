import { listEvidence as listEndpoint, readValidation as readEndpoint, replicateVersion, studyStability } from '@tallystone/contracts/validation/endpoints';
import { canReadVersion, canReplicate } from '../../policies/versions';
import { startReplication } from '../../services/validation/replicate';
import { readValidation } from '../../services/validation/read-validation';
import { startStability } from '../../services/validation/stability';
import { listEvidence } from '../../services/versions/evidence';
import { findVersion } from '../../services/versions/find-version';
import { type Route, defineRoute } from '../http/route';

export const validationRoutes: readonly Route[] = [
  defineRoute(readEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    act: ({ context, person, subject }) => readValidation(context.sequelize, subject, person),
  }),
  defineRoute(replicateVersion, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canReplicate(person, subject),
    act: async ({ context, tx, person, subject, body, requestId }) => ({
      runId: await startReplication(context, tx, { version: subject, person, method: body.method, requestId }),
    }),
  }),
  defineRoute(studyStability, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canReplicate(person, subject),
    act: async ({ context, tx, person, subject, body, requestId }) => ({
      runId: await startStability(context, tx, { version: subject, person, ...body, requestId }),
    }),
  }),
  defineRoute(listEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    act: async ({ context, subject }) => ({ evidence: await listEvidence(context.sequelize, subject.id) }),
  }),
];
