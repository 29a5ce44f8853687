import path from 'node:path';
import { sql } from 'drizzle-orm';
import express, { type Express, type Router } from 'express';
import { rateLimit } from 'express-rate-limit';
import helmet from 'helmet';
import { AppError, toProblem } from '../shared/contracts/errors.ts';
import { createSessions } from './auth/sessions.ts';
import type { Context } from './context.ts';
import { auditRoutes } from './features/audit/routes.ts';
import { dutyRoutes } from './features/duties/routes.ts';
import { ownershipRoutes } from './features/ownership/routes.ts';
import { boardRoutes } from './features/board/routes.ts';
import { calibrationRoutes } from './features/calibrations/routes.ts';
import { eventRoutes } from './features/events/routes.ts';
import { judgingRoutes } from './features/judging/routes.ts';
import { historyRoutes } from './features/history/routes.ts';
import { laboratoryRoutes } from './features/laboratory/routes.ts';
import { mailRoutes } from './features/mail/routes.ts';
import { peopleRoutes } from './features/people/routes.ts';
import { registerRoutes } from './features/register/routes.ts';
import { runRoutes } from './features/runs/routes.ts';
import { sampleRoutes } from './features/samples/routes.ts';
import { samplingRoutes } from './features/sampling/routes.ts';
import { siteRoutes } from './features/sites/routes.ts';
import { tagRoutes } from './features/tags/routes.ts';
import { openApiDocument } from './http/openapi.ts';
import { notFound, problems } from './http/problems.ts';
import { checkOrigin, loadActor, numberRequests } from './http/session.ts';

export interface AppOptions {
  /** Folder of the built client; without it only the API is served. */
  clientFolder?: string;
  /** Sign-in attempts a quarter of an hour and address. */
  signInAttempts?: number;
  /** Routers beside the product's own, such as a benchmark's peer. */
  extraFeatures?: ((context: Context) => Router)[];
}

/** The Express application: middleware in order, then one router a feature. */
export function createApp(context: Context, options: AppOptions = {}): Express {
  const app = express();
  app.set('trust proxy', context.config.trustProxy);
  app.set('query parser', 'simple');
  app.disable('x-powered-by');
  app.use(numberRequests);
  app.use(securityHeaders(context));
  app.get('/api/health', async (_request, response) => {
    await context.db.execute(sql`select 1`);
    response.json({ status: 'ready' });
  });
  app.get('/api/openapi.json', (_request, response) => {
    response.json(openApiDocument(context.config.publicUrl));
  });
  const api = express.Router();
  api.use((_request, response, next) => {
    response.setHeader('Cache-Control', 'no-store');
    next();
  });
  api.use(checkOrigin(context));
  const attempts = options.signInAttempts ?? 20;
  api.use('/session', slowDownGuessing(attempts, true));
  api.use('/password-links', slowDownGuessing(attempts, false));
  api.use(loadActor(context, createSessions(context.db, context.config.publicUrl.startsWith('https:'))));
  for (const routes of [...features, ...(options.extraFeatures ?? [])]) api.use(routes(context));
  api.use(notFound);
  app.use('/api/v1', api);
  app.use('/api', notFound);
  if (options.clientFolder) serveClient(app, options.clientFolder);
  app.use(problems(context));
  return app;
}

const features = [
  peopleRoutes,
  siteRoutes,
  tagRoutes,
  historyRoutes,
  sampleRoutes,
  samplingRoutes,
  laboratoryRoutes,
  runRoutes,
  registerRoutes,
  judgingRoutes,
  eventRoutes,
  calibrationRoutes,
  dutyRoutes,
  ownershipRoutes,
  boardRoutes,
  mailRoutes,
  auditRoutes,
];

function securityHeaders(context: Context) {
  const self = ["'self'"];
  const secure = context.config.publicUrl.startsWith('https:');
  return helmet({
    contentSecurityPolicy: {
      useDefaults: false,
      directives: {
        defaultSrc: self,
        scriptSrc: self,
        styleSrc: self,
        imgSrc: ["'self'", 'data:', 'blob:'],
        fontSrc: self,
        connectSrc: self,
        objectSrc: ["'none'"],
        baseUri: ["'none'"],
        formAction: self,
        frameAncestors: ["'none'"],
      },
    },
    strictTransportSecurity: secure ? { maxAge: 31_536_000 } : false,
    referrerPolicy: { policy: 'same-origin' },
  });
}

/** Counts attempts by address: of signing in only those that failed, since a whole plant may share one address. */
function slowDownGuessing(limit: number, skipSuccessfulRequests: boolean) {
  return rateLimit({
    windowMs: 15 * 60_000,
    limit,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    // Without a trusted proxy the header is simply not believed; that is no mistake in the settings.
    validate: { xForwardedForHeader: false },
    skip: (request) => request.method !== 'POST',
    skipSuccessfulRequests,
    handler: (_request, response) => {
      const problem = toProblem(
        new AppError(
          'rate-limited',
          'Too many attempts from this address. Wait a quarter of an hour and try again.',
        ),
        String(response.locals.requestId),
      );
      response.status(problem.status).type('application/problem+json').send(JSON.stringify(problem));
    },
  });
}

function serveClient(app: Express, folder: string): void {
  app.use(
    '/assets',
    express.static(path.join(folder, 'assets'), { immutable: true, maxAge: '1y', fallthrough: false }),
  );
  app.use(express.static(folder, { index: false }));
  app.get('/{*any}', (_request, response) => {
    response.setHeader('Cache-Control', 'no-cache');
    response.sendFile(path.resolve(folder, 'index.html'));
  });
}
