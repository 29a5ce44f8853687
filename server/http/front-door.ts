import express, {
  type NextFunction,
  type Request,
  type RequestHandler,
  type Response,
  Router,
} from 'express';
import type { z } from 'zod';
import type { Access } from '../../shared/contracts/access.ts';
import type { EndpointSpec, Received, Reply } from '../../shared/contracts/endpoint.ts';
import { AppError } from '../../shared/contracts/errors.ts';
import { knowsSite, may, sitesWhere } from '../../shared/rules/permissions.ts';
import type { Context } from '../context.ts';
import type { Actor, Origin } from './request.ts';
import { type Permitted, type RowOf, type RowTarget, findRow, isRowTarget } from './rows.ts';
import { type StoredUpload, receiveUpload } from './upload.ts';
import { parsePart } from './parse.ts';

type Target<E extends EndpointSpec> = E['access'] extends { on: infer On } ? On : never;

/** What a handler works with: all checked, all typed. */
export interface Call<E extends EndpointSpec> {
  context: Context;
  params: Received<E, 'params'>;
  query: Received<E, 'query'>;
  body: Received<E, 'body'>;
  actor: E['access'] extends 'public' ? Actor | null : Actor;
  /** The row that the endpoint acts on. */
  row: Target<E> extends RowTarget ? Permitted<RowOf<Target<E>>> : undefined;
  /** For lists over sites: where the person may; 'every' for an administrator who may everywhere. */
  siteIds: Target<E> extends 'sites' ? number[] | 'every' : undefined;
  upload: E['kind'] extends 'upload' ? StoredUpload : undefined;
  origin: Origin;
  request: Request;
  response: Response;
}

/** A file that a download endpoint answers with. */
export interface Download {
  fileName: string;
  contentType: string;
  content: string;
}

type Answer<E extends EndpointSpec> = E['kind'] extends 'download'
  ? Download
  : z.input<E['reply']> | Reply<E>;
export type Handlers<T extends Record<string, EndpointSpec>> = {
  [K in keyof T]: (call: Call<T[K]>) => Promise<Answer<T[K]>>;
};

const jsonBody = express.json({ limit: '2mb' });

/** Makes the Express routes of a part of the endpoint table. A handler that is missing does not compile. */
export function routesOf<T extends Record<string, EndpointSpec>>(
  context: Context,
  table: T,
  handlers: Handlers<T>,
): Router {
  const router = Router();
  for (const name of Object.keys(table) as (keyof T)[]) {
    const spec = table[name]!;
    const register = { GET: 'get', POST: 'post', PUT: 'put', DELETE: 'delete' } as const;
    router[register[spec.method]](
      spec.path,
      door(context, spec, handlers[name] as (call: never) => Promise<unknown>),
    );
  }
  return router;
}

/** Order at the door: session (before), row, permission, upload, then body; a foreign site is not found. */
function door(
  context: Context,
  spec: EndpointSpec,
  handler: (call: never) => Promise<unknown>,
): RequestHandler {
  return async (request: Request, response: Response, next: NextFunction) => {
    const actor = (response.locals.actor ?? null) as Actor | null;
    const origin: Origin = { requestId: String(response.locals.requestId), fromAddress: request.ip ?? '' };
    const { row, siteId } = await admit(context, spec.access, request, actor);
    const params = parsePart(spec.params, request.params);
    const query = parsePart(spec.query, request.query);
    let upload: StoredUpload | undefined;
    if (spec.kind === 'upload') {
      upload = await receiveUpload(context, request, response, {
        siteId: siteId!,
        personId: actor!.id,
        maxBytes: spec.maxBytes!,
      });
    } else if (spec.body) {
      await new Promise<void>((resolve, reject) =>
        jsonBody(request, response, (error?: unknown) => (error ? reject(error as Error) : resolve())),
      );
    }
    const call = {
      context,
      params,
      query,
      body: parsePart(spec.body, request.body ?? {}),
      actor,
      row,
      siteIds:
        actor && typeof spec.access === 'object' && spec.access.on === 'sites'
          ? sitesWhere(actor, spec.access.may)
          : undefined,
      upload,
      origin,
      request,
      response,
    };
    const answer = await handler(call as never);
    if (response.headersSent) return next();
    if (spec.kind === 'download') return sendDownload(response, answer as Download);
    response.json(answer);
  };
}

async function admit(
  context: Context,
  access: Access,
  request: Request,
  actor: Actor | null,
): Promise<{ row?: unknown; siteId?: number }> {
  if (access === 'public') return {};
  if (!actor) throw new AppError('not-signed-in', 'Sign in first; your session may have ended.');
  if (access === 'self') return {};
  if (access.on === 'sites') return {};
  if (!isRowTarget(access.on)) {
    if (!may(actor, access.may, null)) throw forbidden();
    return {};
  }
  const found = await findRow(context.db, access.on, request.params);
  if (!found || !knowsSite(actor, found.siteId)) {
    throw new AppError('not-found', 'There is nothing here, or it belongs to a site where you have no role.');
  }
  if (!may(actor, access.may, found.siteId)) throw forbidden();
  return found;
}

const forbidden = () =>
  new AppError(
    'forbidden',
    'Your role at this site doesn’t allow this. An administrator gives roles under People.',
  );

function sendDownload(response: Response, file: Download): void {
  response.type(file.contentType);
  response.attachment(file.fileName);
  response.send(file.content);
}
