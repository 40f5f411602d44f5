import { constants } from 'node:zlib';
import compression from 'compression';
import connectPgSimple from 'connect-pg-simple';
import express, { Router, type ErrorRequestHandler, type Express } from 'express';
import session from 'express-session';
import helmet from 'helmet';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import type pg from 'pg';
import { makeCsrf } from './access/csrf.ts';
import { estateGuard } from './access/guard.ts';
import { linkAddress } from './access/linkAddress.ts';
import { makePassport } from './access/signIn.ts';
import { storableRequest } from './access/storableRequest.ts';
import type { Config } from './config.ts';
import { Missing, problemOf } from './errors.ts';
import { log } from './log.ts';
import { accountRoutes } from './routes/account.ts';
import { bagRoutes } from './routes/bags.ts';
import { blockRoutes } from './routes/blocks.ts';
import { crewDoorRoutes } from './routes/crewDoor.ts';
import { crewRoutes } from './routes/crew.ts';
import { fieldPhotoRoutes } from './routes/fieldPhotos.ts';
import { describedApi } from './routes/openapi.ts';
import { formatRoutes } from './routes/formats.ts';
import { earlierRoutes } from './routes/earlier.ts';
import { estateListRoutes, estateRoutes } from './routes/estates.ts';
import { harvestRoutes, noticeStateRoutes } from './routes/harvest.ts';
import { importRoutes } from './routes/imports.ts';
import { jobRoutes } from './routes/jobs.ts';
import { labRoutes } from './routes/lab.ts';
import { languageOf } from './routes/language.ts';
import { layerRoutes } from './routes/layers.ts';
import { lotRoutes } from './routes/lots.ts';
import { measureRoutes } from './routes/measures.ts';
import { peopleRoutes } from './routes/people.ts';
import { planRoutes } from './routes/plans.ts';
import { readingRoutes } from './routes/readings.ts';
import { recordRoutes } from './routes/records.ts';
import { restrictionRoutes } from './routes/restrictions.ts';
import { roundRoutes } from './routes/rounds.ts';
import { searchRoutes } from './routes/search.ts';
import { sessionRoutes } from './routes/session.ts';
import { todayRoutes } from './routes/today.ts';
import { weatherRoutes } from './routes/weather.ts';
import { zoningRoutes } from './routes/zonings.ts';
import { sessionMs } from './services/account/openSessions.ts';
import { receiveInPieces } from './storage/resumable.ts';
import { receiveFiles } from './storage/uploads.ts';

/** A phone sends some 300 KB; a camera's original fits too. */
const photoLimitBytes = 15 * 2 ** 20;
/** The reader of laboratories' files takes no more, so the upload need not either. */
const labFileBytes = 8_000_000;

export interface AppParts {
  isReady: () => Promise<boolean>;
  /** Connections of the session store; whoever opens the pool closes it. */
  sessionPool: pg.Pool;
  /** Folder of the built client, or null when another server serves it. */
  clientFolder: string | null;
}

/** The whole web application; opens no port. `isReady` tells whether the database answers. */
export function makeApp(config: Config, parts: AppParts): Express {
  const app = express();
  app.set('trust proxy', config.trustProxy);
  app.disable('x-powered-by');
  app.use(securityHeaders(config));
  // One step above the library's choice: a tenth less for a weak signal, for a few milliseconds of ours.
  app.use(compression({ brotli: { params: { [constants.BROTLI_PARAM_QUALITY]: 5 } }, filter: (request, response) => !request.path.endsWith('/events') && compression.filter(request, response) }));
  app.get('/api/health', (_request, response) => void response.json({ ok: true }));
  app.get('/api/ready', async (_request, response) => {
    const ready = await parts.isReady();
    response.status(ready ? 200 : 503).json({ ready });
  });
  app.use('/api', makeApi(config, parts.sessionPool));
  if (parts.clientFolder) serveClient(app, parts.clientFolder);
  app.use(answerProblem);
  return app;
}

function makeApi(config: Config, sessionPool: pg.Pool): Router {
  const api = Router();
  const csrf = makeCsrf();
  const passport = makePassport({ allowDemo: config.demo });
  const Store = connectPgSimple(session);
  api.use(express.json({ limit: '2mb' }), storableRequest);
  api.use(
    session({
      store: new Store({ pool: sessionPool, tableName: 'sessions', pruneSessionInterval: false }),
      name: 'patchrow',
      secret: config.sessionSecret,
      resave: false,
      saveUninitialized: false,
      rolling: true,
      cookie: { httpOnly: true, sameSite: 'lax', secure: config.production && config.trustProxy > 0 ? true : 'auto', maxAge: sessionMs },
    }),
  );
  api.use(passport.session());
  api.use(csrf.protect);
  api.get('/openapi.json', (_request, response) => void response.json(describedApi()));
  api.use(sessionRoutes({ passport, csrfToken: csrf.token, demo: config.demo, signInTries: config.signInTries }));
  api.use(accountRoutes({ demo: config.demo, signInTries: config.signInTries, links: linkAddress(config) }));
  api.use(crewDoorRoutes({ csrfToken: csrf.token, demo: config.demo, signInTries: config.signInTries }));
  api.use(estateListRoutes());
  api.use(formatRoutes());
  api.use(noticeStateRoutes());
  api.use('/estates/:estateId', estateGuard, makeEstateApi(config));
  api.use(() => {
    throw new Missing();
  });
  return api;
}

function makeEstateApi(config: Config): Router {
  const router = Router({ mergeParams: true });
  const links = linkAddress(config);
  router.use(
    estateRoutes(),
    peopleRoutes({ links }),
    recordRoutes(),
    jobRoutes(),
    blockRoutes(),
    importRoutes({ receive: receiveFiles(config.uploadLimitBytes), receiveInPieces: receiveInPieces(config.uploadLimitBytes) }),
    layerRoutes(),
    measureRoutes(),
    restrictionRoutes(),
    readingRoutes(),
    lotRoutes(),
    zoningRoutes(),
  );
  router.use(planRoutes(), roundRoutes({ links }), bagRoutes(), labRoutes({ receive: receiveFiles(labFileBytes) }), earlierRoutes({ receive: receiveFiles(labFileBytes) }));
  router.use(crewRoutes(), fieldPhotoRoutes({ receive: receiveFiles(Math.min(config.uploadLimitBytes, photoLimitBytes)) }));
  router.use(harvestRoutes({ links }), weatherRoutes());
  router.use(todayRoutes(), searchRoutes());
  return router;
}

function securityHeaders(config: Config) {
  return helmet({
    contentSecurityPolicy: {
      useDefaults: true,
      directives: {
        'default-src': ["'self'"],
        'script-src': ["'self'"],
        'worker-src': ["'self'", 'blob:'],
        'img-src': ["'self'", 'data:', 'blob:'],
        'connect-src': ["'self'", 'data:', 'blob:'],
        // The component library writes its theme into style tags.
        'style-src': ["'self'", "'unsafe-inline'"],
        'font-src': ["'self'"],
        'upgrade-insecure-requests': config.publicUrl.startsWith('https:') ? [] : null,
      },
    },
    strictTransportSecurity: config.publicUrl.startsWith('https:'),
  });
}

function serveClient(app: Express, folder: string): void {
  app.use('/assets', express.static(join(folder, 'assets'), { immutable: true, maxAge: '1y', fallthrough: false }));
  app.use(express.static(folder, { maxAge: 0, index: false }));
  const page = join(folder, 'index.html');
  if (existsSync(page)) app.get('/{*path}', (_request, response) => response.set('cache-control', 'no-cache').sendFile(page));
}

const answerProblem: ErrorRequestHandler = (error: unknown, request, response, next) => {
  if (response.headersSent) {
    next(error);
    return;
  }
  const { status, code, title, detail, errors, extra } = problemOf(error, languageOf(request));
  if (status >= 500) log.error('request failed', error, { method: request.method, path: request.path });
  response
    .status(status)
    .set('content-language', languageOf(request))
    .vary('accept-language')
    .type('application/problem+json')
    .send(JSON.stringify({ type: 'about:blank', title, status, detail, code, ...(errors ? { errors } : {}), ...extra }));
};
