/**
 * The HTTP application as a function of what it depends on: the one ordered list of plugins and routes. It opens nothing, listens
 * nowhere and knows no environment; main.ts does that.
 */
import type { IncomingMessage, ServerResponse } from 'node:http';
import Fastify, { type FastifyBaseLogger, type FastifyInstance, type RawServerDefault } from 'fastify';
import type { ZodTypeProvider } from 'fastify-type-provider-zod';
import type { Stores } from '../db/stores.ts';
import type { ImportLimits } from './imports/import-limits.ts';
import { createMetrics } from './metrics.ts';
import { documentCalls } from './plugins/call-documents.ts';
import { readJsonBodies } from './plugins/json-bodies.ts';
import { countRequests } from './plugins/request-counting.ts';
import { identifyRequests, newRequestId } from './plugins/request-ids.ts';
import { validateBySchema } from './plugins/schema-validation.ts';
import { addSecurityHeaders } from './plugins/security-headers.ts';
import { refuseWhileStopping } from './plugins/stopping.ts';
import { clientErrorText, replyToError, sendProblem } from './problem-replies.ts';
import { answerInFront, readyAnswers } from './ready-answers.ts';
import { badgeRoutes } from './routes/badges.ts';
import { entryRoutes } from './routes/entries.ts';
import { entryListRoutes } from './routes/entry-lists.ts';
import { healthRoutes } from './routes/health.ts';
import { importRoutes } from './routes/imports.ts';
import { metricsRoute } from './routes/metrics.ts';
import { partnerRoutes } from './routes/partners.ts';
import { profileRoute } from './routes/profiles.ts';
import { screeningStreamRoutes } from './routes/screening-streams.ts';
import { screeningRoutes } from './routes/screenings.ts';
import { storedVerdictRoutes } from './routes/stored-verdicts.ts';
import { verdictLookupRoute } from './routes/verdict-lookup.ts';
import { verdictRequirementRoute } from './routes/verdict-requirement.ts';
import { verdictWaveformRoutes } from './routes/verdict-waveforms.ts';
import { verdictRoutes } from './routes/verdicts.ts';
import type { ScreeningService } from './screenings/screening-service.ts';
import type { Simulation } from './simulation/simulation.ts';

export interface AppDependencies extends Stores {
  readonly logger: FastifyBaseLogger;
  readonly simulation: Simulation;
  readonly importLimits: ImportLimits;
  readonly screening: ScreeningService;
  /** whether the record answers a read */
  readonly isRecordReadable: () => boolean;
  readonly simulationLoad: () => { readonly threads: number; readonly waiting: number; readonly completed: number };
  readonly now: () => Date;
}

export type App = FastifyInstance<RawServerDefault, IncomingMessage, ServerResponse, FastifyBaseLogger, ZodTypeProvider>;

/** bytes; the largest honest pairing (12 groups of 64 points, 101 dial positions) is under 60 KiB */
const BODY_LIMIT = 1024 * 1024;
/** ms; stopping waits for idle connections no longer than this */
const KEEP_ALIVE_TIMEOUT = 5_000;
/** ms for a request's headers to arrive in full: long enough for any line, short for those who only hold connections open */
const HEADERS_TIMEOUT = 30_000;
/** ms for a request's bytes to arrive in full: a list of lamps over a slow line, which is also taken in only as fast as it is staged */
const REQUEST_TIMEOUT = 600_000;

export async function buildApp(dependencies: AppDependencies): Promise<App> {
  const { logger } = dependencies;
  const app: App = Fastify({
    loggerInstance: logger,
    bodyLimit: BODY_LIMIT,
    keepAliveTimeout: KEEP_ALIVE_TIMEOUT,
    requestTimeout: REQUEST_TIMEOUT,
    http: { headersTimeout: HEADERS_TIMEOUT },
    forceCloseConnections: 'idle',
    // plugins/stopping.ts answers for itself, with a problem document
    return503OnClosing: false,
    requestIdHeader: false,
    genReqId: newRequestId,
    routerOptions: { maxParamLength: 500 },
    frameworkErrors: (error, request, reply) => void replyToError(error, request, reply),
    clientErrorHandler(error, socket) {
      if (socket.writable && !socket.destroyed) socket.end(clientErrorText(logger, error));
    },
  });
  const metrics = createMetrics();

  app.setErrorHandler(replyToError);
  app.setNotFoundHandler((request, reply) =>
    sendProblem(reply, 'no-such-call', `There is no ${request.method} at this path. /docs lists the calls.`),
  );

  readJsonBodies(app);
  identifyRequests(app);
  refuseWhileStopping(app);
  const count = countRequests(app, metrics);
  const ready = readyAnswers();
  answerInFront(app, ready, ({ route, status }, seconds) => count('GET', route, status, seconds));
  await addSecurityHeaders(app);
  validateBySchema(app);
  await documentCalls(app);

  await app.register(healthRoutes(dependencies));
  await app.register(metricsRoute(dependencies, metrics));
  await app.register(verdictRoutes(dependencies, metrics));
  await app.register(storedVerdictRoutes(dependencies, ready));
  await app.register(verdictLookupRoute(dependencies));
  await app.register(verdictWaveformRoutes(dependencies));
  await app.register(verdictRequirementRoute(dependencies));
  await app.register(profileRoute(dependencies));
  await app.register(entryRoutes(dependencies));
  await app.register(entryListRoutes(dependencies));
  await app.register(partnerRoutes(dependencies));
  await app.register(badgeRoutes(dependencies, ready));
  await app.register(importRoutes(dependencies));
  await app.register(screeningRoutes(dependencies));
  await app.register(screeningStreamRoutes(dependencies));
  return app;
}
