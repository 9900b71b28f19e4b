import {
  actOnVersion as actEndpoint,
  downloadResult,
  downloadSpecification,
  freezeVersion,
  listReviews,
  listVersions,
  readTexts as readTextsEndpoint,
  readVersion,
  saveTexts as saveTextsEndpoint,
} from '@tallystone/contracts/versions/endpoints';
import type { Response } from 'express';
import { canDevelopModel, canListModels, canReadModel } from '../../policies/models';
import { canActOnVersion, canReadVersion, canWriteTexts } from '../../policies/versions';
import { notFound } from '../../problems/problem';
import { findFit } from '../../services/fits/find-fit';
import { findModel } from '../../services/models/find-model';
import { actOnVersion } from '../../services/versions/act';
import { findVersion, findVersions, findWaitingVersions, holdVersion } from '../../services/versions/find-version';
import { startFreezing } from '../../services/versions/freeze';
import { frozenText } from '../../services/versions/frozen-text';
import { gatesOf } from '../../services/versions/gates';
import { presentVersion, presentVersionSummary } from '../../services/versions/present-version';
import { readTexts, saveTexts } from '../../services/versions/texts';
import { sendAttachment } from '../http/attachment';
import { type Route, defineRoute } from '../http/route';

/** Canonical JSON as it was hashed, as a file. */
const sendJson = (response: Response, name: string, text: string): void =>
  sendAttachment(response, { name, type: 'application/json; charset=utf-8' }, text);

export const versionRoutes: readonly Route[] = [
  defineRoute(listVersions, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx),
    authorise: ({ person, subject }) => canReadModel(person, subject),
    act: async ({ context, person, subject, tx }) => ({
      versions: (await findVersions(context.sequelize, subject.id, tx)).map(presentVersionSummary),
      abilities: canDevelopModel(person, subject).allowed ? ['freeze' as const] : [],
    }),
  }),
  defineRoute(freezeVersion, {
    access: 'signed-in',
    idempotent: true,
    find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx),
    authorise: ({ person, subject }) => canDevelopModel(person, subject),
    act: async ({ context, tx, person, subject, body, requestId }) => {
      const fit = await findFit(context.sequelize, body.fitId, tx);
      if (!fit || fit.modelId !== subject.id) throw notFound();
      return { runId: await startFreezing(context, tx, { fit, person, note: body.note, requestId }) };
    },
  }),
  defineRoute(readVersion, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    act: async ({ context, person, subject }) => presentVersion(subject, await gatesOf(context.sequelize, subject), person),
  }),
  defineRoute(actEndpoint, {
    access: 'signed-in',
    find: async ({ context, params, tx }) => {
      await holdVersion(context.sequelize, tx, params.versionId);
      return findVersion(context.sequelize, params.versionId, tx);
    },
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    permit: ({ person, subject, body }) => canActOnVersion(person, subject, body.act),
    act: async ({ context, tx, person, subject, body }) => {
      const version = await actOnVersion(context, tx, subject, person, body);
      return presentVersion(version, await gatesOf(context.sequelize, version, tx), person);
    },
  }),
  defineRoute(readTextsEndpoint, {
    access: 'signed-in',
    find: ({ context, params, tx }) => findVersion(context.sequelize, params.versionId, tx),
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    act: async ({ context, person, subject, tag }) => {
      const texts = await readTexts(context.sequelize, subject, person);
      tag(texts.revision);
      return texts;
    },
  }),
  defineRoute(saveTextsEndpoint, {
    access: 'signed-in',
    largestBody: 1024 * 1024,
    find: async ({ context, params, tx }) => {
      await holdVersion(context.sequelize, tx, params.versionId);
      return findVersion(context.sequelize, params.versionId, tx);
    },
    authorise: ({ person, subject }) => canWriteTexts(person, subject),
    act: async ({ context, tx, person, subject, body, match, tag }) => {
      const before = await readTexts(context.sequelize, subject, person, tx);
      match(before.revision);
      await saveTexts(tx, subject, person, before, body);
      const after = await readTexts(context.sequelize, subject, person, tx);
      tag(after.revision);
      return after;
    },
  }),
  defineRoute(downloadSpecification, {
    access: 'signed-in',
    streams: true,
    find: ({ context, params }) => findVersion(context.sequelize, params.versionId),
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    act: async ({ context, subject, response }) => {
      sendJson(response, `${subject.inventoryNumber}-version-${subject.number}-specification.json`, await frozenText(context.sequelize, subject, 'specification'));
    },
  }),
  defineRoute(downloadResult, {
    access: 'signed-in',
    streams: true,
    find: ({ context, params }) => findVersion(context.sequelize, params.versionId),
    authorise: ({ person, subject }) => canReadVersion(person, subject),
    act: async ({ context, subject, response }) => {
      sendJson(response, `${subject.inventoryNumber}-version-${subject.number}-result.json`, await frozenText(context.sequelize, subject, 'result'));
    },
  }),
  defineRoute(listReviews, {
    access: 'signed-in',
    admit: (person) => canListModels(person),
    act: async ({ context, person }) => ({
      versions: (await findWaitingVersions(context.sequelize)).filter((version) => canReadVersion(person, version).allowed).map(presentVersionSummary),
    }),
  }),
];
