import { Readable } from 'node:stream';
import * as endpoints from '@tallystone/contracts/samples/endpoints';
import type { Request as ExpressRequest, Response as ExpressResponse } from 'express';
import type { Context } from '../../context';
import { canAddSample, canSendUpload } from '../../policies/samples';
import { findModel } from '../../services/models/find-model';
import { answerUpload, beginUpload, findUpload, fingerprintUpload } from '../../services/samples/uploads';
import { type Call, type Route, defineRoute } from '../http/route';

/** The tus protocol: our recipe authenticates and authorises, @tus/server answers. */
export function uploadRoutes(): Route[] {
  return [
    defineRoute(endpoints.beginUpload, {
      access: 'signed-in',
      streams: true,
      find: ({ context, params }) => findModel(context.sequelize, params.modelId),
      authorise: ({ person, subject }) => canAddSample(person, subject),
      async act({ context, person, subject, request, response }) {
        const headers = headersOf(request);
        const { id } = await beginUpload(context, subject, person, headers);
        headers.set('x-upload-id', id);
        await relay(context, request, response, headers);
        return undefined;
      },
    }),
    defineRoute(endpoints.fingerprintUpload, {
      access: 'signed-in',
      find: findUploadOf,
      authorise: ({ person, subject }) => canSendUpload(person, subject.model, subject.upload.personId),
      act: ({ context, subject }) => fingerprintUpload(context, subject.upload.id),
    }),
    ...[endpoints.askUpload, endpoints.sendUpload, endpoints.dropUpload].map((endpoint) =>
      defineRoute(endpoint, {
        access: 'signed-in',
        streams: true,
        find: findUploadOf,
        authorise: ({ person, subject }) => canSendUpload(person, subject.model, subject.upload.personId),
        async act({ context, request, response }) {
          await relay(context, request, response, headersOf(request));
          return undefined;
        },
      }),
    ),
  ];
}

type UploadEndpoint =
  typeof endpoints.fingerprintUpload | typeof endpoints.askUpload | typeof endpoints.sendUpload | typeof endpoints.dropUpload;

async function findUploadOf({ context, params }: Pick<Call<UploadEndpoint, 'signed-in'>, 'context' | 'params'>) {
  const model = await findModel(context.sequelize, params.modelId);
  const upload = model && (await findUpload(context, model.id, params.uploadId));
  return upload ? { model, upload } : null;
}

function headersOf(request: ExpressRequest): Headers {
  const headers = new Headers();
  for (const [name, value] of Object.entries(request.headers)) {
    // Sent by us alone.
    if (name === 'x-upload-id' || value === undefined) continue;
    headers.set(name, Array.isArray(value) ? value.join(', ') : value);
  }
  return headers;
}

async function relay(context: Context, request: ExpressRequest, response: ExpressResponse, headers: Headers): Promise<void> {
  const carries = request.method === 'PATCH' || request.method === 'POST';
  const init: RequestInit & { duplex: 'half' } = {
    method: request.method,
    headers,
    duplex: 'half',
    body: carries ? (Readable.toWeb(request) as ReadableStream) : null,
  };
  const answer = await answerUpload(
    context,
    new Request(`http://${request.headers.host ?? 'localhost'}${request.originalUrl}`, init),
  );
  if (response.destroyed) return;
  answer.headers.forEach((value, name) => response.setHeader(name, value));
  response.status(answer.status).end();
}
