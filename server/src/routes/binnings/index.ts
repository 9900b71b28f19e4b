import {
  calculateCorrelations,
  listBinningEdits,
  listBinnings,
  listCharacteristics,
  listEdits,
  readBinning,
  readCharacteristic,
  readCorrelations,
  readMonths,
  reclassCharacteristics as reclassEndpoint,
  saveCharacteristic,
  setInclusion as setInclusionEndpoint,
  splitFineClass as splitEndpoint,
  startBinning as startEndpoint,
  startReclassing as startReclassingEndpoint,
} from '@tallystone/contracts/binnings/endpoints';
import { canEditBinning, canListBinnings, canReadBinning, canStartBinning } from '../../policies/binnings';
import { setInclusion } from '../../services/binnings/change-several';
import { allEdits, allEditsOfBinning, presentEdit, presentHistoric } from '../../services/binnings/edits';
import { startCorrelation } from '../../services/binnings/correlate-binning';
import { presentCorrelations } from '../../services/binnings/correlations';
import { findBinning, findBinnings } from '../../services/binnings/find-binning';
import { findOnBench } from '../../services/binnings/find-characteristic';
import { presentBinning, presentBinningSummary, presentCharacteristics, presentDetail } from '../../services/binnings/present';
import { completeIfOld } from '../../services/binnings/complete-binning';
import { presentMonths } from '../../services/binnings/months';
import { reclassCharacteristics, startReclassing } from '../../services/binnings/reclass';
import { saveBins } from '../../services/binnings/save-bins';
import { splitFineClass } from '../../services/binnings/split-fine-class';
import { startBinning } from '../../services/binnings/start-binning';
import { findModel } from '../../services/models/find-model';
import { type Route, defineRoute } from '../http/route';

/** A characteristic with thousands of category names and 50 edits, each with the bins before and after. */
const largestSave = 8 * 1024 * 1024;

export const binningRoutes: readonly Route[] = [
  defineRoute(listBinnings, {
    access: 'signed-in',
    find: ({ context, params }) => findModel(context.sequelize, params.modelId),
    authorise: ({ person, subject }) => canListBinnings(person, subject),
    act: async ({ context, person, subject }) => ({
      binnings: (await findBinnings(context.sequelize, subject.id)).map(presentBinningSummary),
      abilities: canStartBinning(person, subject).allowed ? ['start-binning' as const] : [],
    }),
  }),
  defineRoute(startEndpoint, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx),
    authorise: ({ person, subject }) => canStartBinning(person, subject),
    act: async ({ context, tx, person, subject, body, requestId }) => {
      const binning = await startBinning(context, tx, { model: subject, person, requestId, ...body });
      return presentBinning(context.sequelize, person, binning, tx);
    },
  }),
  defineRoute(readBinning, {
    access: 'signed-in',
    find: ({ context, params }) => findBinning(context.sequelize, params.binningId),
    authorise: ({ person, subject }) => canReadBinning(person, subject),
    act: ({ context, person, subject }) => presentBinning(context.sequelize, person, subject),
  }),
  defineRoute(listCharacteristics, {
    access: 'signed-in',
    find: ({ context, params }) => findBinning(context.sequelize, params.binningId),
    authorise: ({ person, subject }) => canReadBinning(person, subject),
    act: async ({ context, person, subject, requestId }) => {
      if (subject.state === 'ready' && subject.erased === null) {
        await completeIfOld(context, { binningId: subject.id, modelId: subject.modelId, person, requestId });
      }
      return presentCharacteristics(context.sequelize, subject);
    },
  }),
  defineRoute(reclassEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findBinning(context.sequelize, params.binningId, tx),
    authorise: ({ person, subject }) => canEditBinning(person, subject),
    act: async ({ context, tx, person, subject, body }) => {
      await reclassCharacteristics(context.sequelize, tx, person, subject, body);
      return presentCharacteristics(context.sequelize, subject, tx);
    },
  }),
  defineRoute(startReclassingEndpoint, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findBinning(context.sequelize, params.binningId, tx),
    authorise: ({ person, subject }) => canEditBinning(person, subject),
    act: async ({ context, tx, person, subject, body, requestId }) => ({
      runId: await startReclassing(context, tx, { ...body, person, binning: subject, requestId }),
    }),
  }),
  defineRoute(setInclusionEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findBinning(context.sequelize, params.binningId, tx),
    authorise: ({ person, subject }) => canEditBinning(person, subject),
    act: async ({ context, tx, person, subject, body }) => {
      await setInclusion(context.sequelize, tx, person, subject, body);
      return presentCharacteristics(context.sequelize, subject, tx);
    },
  }),
  defineRoute(readCharacteristic, {
    access: 'signed-in',
    find: ({ context, params }) => findOnBench(context.sequelize, params.binningId, params.characteristicId),
    authorise: ({ person, subject }) => canReadBinning(person, subject.binning),
    act: ({ context, person, subject, tag }) => {
      tag(subject.characteristic.revision);
      return presentDetail(context.sequelize, person, subject);
    },
  }),
  defineRoute(saveCharacteristic, {
    access: 'signed-in',
    largestBody: largestSave,
    find: ({ context, params, tx }) => findOnBench(context.sequelize, params.binningId, params.characteristicId, tx, true),
    authorise: ({ person, subject }) => canEditBinning(person, subject.binning),
    act: async ({ context, tx, person, subject, body, params, match, tag }) => {
      match(subject.characteristic.revision);
      await saveBins(context.sequelize, tx, person, subject, body);
      const saved = (await findOnBench(context.sequelize, params.binningId, params.characteristicId, tx))!;
      tag(saved.characteristic.revision);
      return presentDetail(context.sequelize, person, saved, tx);
    },
  }),
  defineRoute(splitEndpoint, {
    access: 'signed-in',
    // Reading the column takes a moment: no row is locked meanwhile.
    ownTransactions: true,
    find: ({ context, params }) => findOnBench(context.sequelize, params.binningId, params.characteristicId),
    authorise: ({ person, subject }) => canEditBinning(person, subject.binning),
    act: async ({ context, person, subject, body, params, tag }) => {
      await splitFineClass(context.sequelize, subject, body.edge);
      const now = (await findOnBench(context.sequelize, params.binningId, params.characteristicId))!;
      tag(now.characteristic.revision);
      return presentDetail(context.sequelize, person, now);
    },
  }),
  defineRoute(readMonths, {
    access: 'signed-in',
    find: ({ context, params }) => findOnBench(context.sequelize, params.binningId, params.characteristicId),
    authorise: ({ person, subject }) => canReadBinning(person, subject.binning),
    act: ({ context, subject }) => presentMonths(context.sequelize, subject),
  }),
  defineRoute(listEdits, {
    access: 'signed-in',
    find: ({ context, params }) => findOnBench(context.sequelize, params.binningId, params.characteristicId),
    authorise: ({ person, subject }) => canReadBinning(person, subject.binning),
    act: async ({ context, subject }) => ({
      edits: (await allEdits(context.sequelize, subject.characteristic.id)).map(presentEdit),
    }),
  }),
  defineRoute(readCorrelations, {
    access: 'signed-in',
    find: ({ context, params }) => findBinning(context.sequelize, params.binningId),
    authorise: ({ person, subject }) => canReadBinning(person, subject),
    act: ({ context, person, subject }) => presentCorrelations(context.sequelize, person, subject),
  }),
  defineRoute(calculateCorrelations, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findBinning(context.sequelize, params.binningId, tx),
    authorise: ({ person, subject }) => canEditBinning(person, subject),
    act: async ({ context, tx, person, subject, requestId }) => ({
      runId: await startCorrelation(context, tx, { binningId: subject.id, person, modelId: subject.modelId, requestId }),
    }),
  }),
  defineRoute(listBinningEdits, {
    access: 'signed-in',
    find: ({ context, params }) => findBinning(context.sequelize, params.binningId),
    authorise: ({ person, subject }) => canReadBinning(person, subject),
    act: async ({ context, subject }) => ({
      edits: (await allEditsOfBinning(context.sequelize, subject.id)).map(presentHistoric),
    }),
  }),
];
