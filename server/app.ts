import { existsSync } from 'node:fs'
import { createServer, type RequestListener } from 'node:http'
import { createServer as createTlsServer } from 'node:https'
import { join } from 'node:path'
import { constants } from 'node:zlib'
import compress from '@fastify/compress'
import helmet from '@fastify/helmet'
import serveFiles from '@fastify/static'
import underPressure from '@fastify/under-pressure'
import Fastify from 'fastify'
import type { ZodTypeProvider } from 'fastify-type-provider-zod'
import type { ZodType } from 'zod'
import { guardAccess } from './api/access.ts'
import { type Api, type Needs, SMALL_LIMIT } from './api/api.ts'
import { choiceRoutes, followedRoute } from './api/choices.ts'
import { coastDownRoute } from './api/coast-down.ts'
import { dayRoutes } from './api/days.ts'
import { docsRoutes } from './api/docs.ts'
import { documentRoutes } from './api/documents.ts'
import { eventRoutes } from './api/events.ts'
import { exampleRoutes } from './api/examples.ts'
import { checkPart } from './api/fault-of.ts'
import { answerClientError, answerFaults, sendFault } from './api/faults.ts'
import { forecastRoutes } from './api/forecasts.ts'
import { guardChanges } from './api/guard.ts'
import { healthRoutes } from './api/health.ts'
import { KINDS } from './api/kinds.ts'
import { describeApi } from './api/openapi.ts'
import { planDesk, type PlanTrade } from './api/plan-desk.ts'
import { planVariantRoutes } from './api/plan-variants.ts'
import { DAY_PLANS, keptPlanRoutes, planRoutes, statelessPlanRoute } from './api/plans.ts'
import { pointingRoute, statelessPointingRoute } from './api/pointing.ts'
import { previewRoute } from './api/previews.ts'
import { raceDocumentsRoute } from './api/race-documents.ts'
import { keptReadingRoutes, readingRoutes } from './api/readings.ts'
import { keptRacePlanRoutes, RACE_PLANS, racePlanRoutes, statelessRacePlanRoute } from './api/race-plans.ts'
import { serialized } from './api/serialized.ts'
import { sessionRoutes } from './api/sessions.ts'
import { sharedRoute, shareRoutes } from './api/shares.ts'
import { variantDesk } from './api/variant-desk.ts'
import { statelessVariantsRoute } from './api/variants.ts'
import { whatIfRoute } from './api/what-if.ts'
import { skyComparisonRoute } from './api/sky-comparison.ts'
import { statelessForecastRoute, statelessTrackerRoute } from './api/stateless-forecast.ts'
import { inTurn } from './api/take-readings.ts'
import { beliefRoute, trackerRoutes } from './api/trackers.ts'
import { answerUnknown } from './api/unknown-address.ts'
import { Fault } from './errors.ts'

/** What the service is put together from. */
export interface Parts extends Needs {
  /** Address that is listened on. */
  host: string
  publicOrigin: string | null
  /** Secret by which the service calls itself. */
  ownToken: string
  tls: { cert: Buffer; key: Buffer } | null
  /** Folder of the built client; null where there is none. */
  webDir: string | null
  /** Stylesheet of the page that describes the API. */
  docsCss: string
  logLevel: string
  /** Delay of the event loop above which new work is refused. [ms] (default 5 s) */
  mostDelayMs?: number
}

/** Longest time for a request to arrive: 24 MB at 1 Mbit/s take 192 s. [ms] */
const REQUEST_MS = 300_000
const MOST_DELAY_MS = 5_000

/** The service without a port: every route, its guards and its errors. */
export async function buildApp(parts: Parts): Promise<Api> {
  const app: Api = Fastify({
    logger: { level: parts.logLevel, stream: process.stderr },
    bodyLimit: SMALL_LIMIT,
    return503OnClosing: false,
    forceCloseConnections: 'idle',
    frameworkErrors: sendFault,
    serverFactory: (handler) => newServer(handler, parts.tls),
    routerOptions: { maxParamLength: 100, ignoreTrailingSlash: false },
  }).withTypeProvider<ZodTypeProvider>()
  app.setValidatorCompiler<ZodType>(({ schema, httpPart }) => checkPart(schema, httpPart))
  app.setSerializerCompiler(() => serialized)
  answerFaults(app)
  answerUnknown(app)
  guardChanges(app, parts)
  await protect(app, parts)
  guardAccess(app, parts)
  await describeApi(app, parts.version)
  await app.register(async (api: Api) => addRoutes(api, parts), { prefix: '/api/v1' })
  healthRoutes(app, parts)
  docsRoutes(app, parts.docsCss)
  await serveClient(app, parts.webDir)
  await app.ready()
  return app
}

function newServer(handler: RequestListener, tls: Parts['tls']) {
  const options = { requestTimeout: REQUEST_MS, keepAliveTimeout: 72_000 }
  const server = tls === null ? createServer(options, handler) : createTlsServer({ ...options, ...tls }, handler)
  server.on('clientError', answerClientError)
  return server
}

async function protect(app: Api, { tls, mostDelayMs = MOST_DELAY_MS }: Parts): Promise<void> {
  let isStopping = false
  app.addHook('preClose', async () => {
    isStopping = true
  })
  app.addHook('onRequest', async () => {
    if (isStopping) throw new Fault('stopping', 'The service is stopping; try again in a moment.')
  })
  // A connection that is kept alive would keep the service from stopping.
  app.addHook('onSend', async (_request, reply) => {
    if (isStopping) reply.header('connection', 'close')
  })
  await app.register(helmet, {
    strictTransportSecurity: tls !== null,
    contentSecurityPolicy: { useDefaults: false, directives: POLICY },
  })
  await app.register(compress, { brotliOptions: { params: { [constants.BROTLI_PARAM_QUALITY]: 4 } } })
  await app.register(underPressure, {
    maxEventLoopDelay: mostDelayMs,
    // Whether the service runs is answered even then; an infinite delay only says that none was measured.
    pressureHandler: async ({ url }, _reply, _type, delayMs) => {
      if (url === '/api/health' || delayMs === Number.POSITIVE_INFINITY) return
      throw new Fault('overloaded', 'The service has too much to do; try again in a moment.')
    },
  })
}

const SELF = ["'self'"]

/** Nothing from elsewhere, and no script or style inside a page. */
const POLICY = {
  defaultSrc: ["'none'"],
  scriptSrc: SELF,
  styleSrc: SELF,
  imgSrc: ["'self'", 'data:'],
  fontSrc: SELF,
  connectSrc: SELF,
  workerSrc: SELF,
  manifestSrc: SELF,
  baseUri: ["'none'"],
  formAction: SELF,
  frameAncestors: ["'none'"],
}

/** Each scope takes its own kinds of body. */
function addRoutes(api: Api, needs: Parts): void {
  for (const kind of KINDS) {
    void api.register(async (scope: Api) => documentRoutes(scope, needs, kind))
    if (kind.formats.length > 1) void api.register(async (scope: Api) => previewRoute(scope, needs, kind))
  }
  void api.register(async (scope: Api) => forecastRoutes(scope, needs))
  void api.register(async (scope: Api) => statelessForecastRoute(scope, needs))
  void api.register(async (scope: Api) => statelessTrackerRoute(scope, needs))
  void api.register(async (scope: Api) => statelessPointingRoute(scope, needs))
  void api.register(async (scope: Api) => statelessPlanRoute(scope, needs))
  void api.register(async (scope: Api) => statelessRacePlanRoute(scope, needs))
  void api.register(async (scope: Api) => whatIfRoute(scope, needs))
  void api.register(async (scope: Api) => statelessVariantsRoute(scope, needs))
  void api.register(async (scope: Api) => skyComparisonRoute(scope, needs))
  void api.register(async (scope: Api) => coastDownRoute(scope, needs))
  dayRoutes(api, needs)
  raceDocumentsRoute(api, needs)
  exampleRoutes(api)
  addCrewRoutes(api, needs)
}

/** What the crew does with a budget once it exists. */
function addCrewRoutes(api: Api, needs: Parts): void {
  const { tls, publicOrigin } = needs
  const isHttps = tls !== null || publicOrigin?.startsWith('https:') === true
  const turns = inTurn()
  void api.register(async (scope: Api) => sessionRoutes(scope, needs, { isHttps }))
  void api.register(async (scope: Api) => choiceRoutes(scope, needs, turns))
  void api.register(async (scope: Api) => readingRoutes(scope, needs, turns))
  void api.register(async (scope: Api) => beliefRoute(scope, needs, turns))
  void api.register(async (scope: Api) => shareRoutes(scope, needs, publicOrigin))
  void api.register(async (scope: Api) => eventRoutes(scope, needs))
  addPlanRoutes(api, needs)
  keptReadingRoutes(api, needs, turns)
  followedRoute(api, needs)
  pointingRoute(api, needs)
  trackerRoutes(api, needs)
  sharedRoute(api, needs)
}

/** Plans of days and races and variants of plans, each worked out at a desk that closes with the service. */
function addPlanRoutes(api: Api, needs: Parts): void {
  const deskOf = (trade: PlanTrade) => {
    const desk = planDesk(needs, trade, (error) => api.log.error(error))
    api.addHook('preClose', () => desk.close())
    return desk
  }
  const dayDesk = deskOf(DAY_PLANS)
  const raceDesk = deskOf(RACE_PLANS)
  void api.register(async (scope: Api) => planRoutes(scope, needs, dayDesk))
  void api.register(async (scope: Api) => racePlanRoutes(scope, needs, raceDesk))
  const variants = variantDesk(needs, (error) => api.log.error(error))
  api.addHook('preClose', () => variants.close())
  void api.register(async (scope: Api) => planVariantRoutes(scope, needs, variants))
  keptPlanRoutes(api, needs)
  keptRacePlanRoutes(api, needs)
}

/** The client: files with a hash in their name never change, everything else is asked for again. */
async function serveClient(app: Api, webDir: string | null): Promise<void> {
  if (webDir === null || !existsSync(join(webDir, 'index.html'))) return
  await app.register(serveFiles, {
    root: webDir,
    cacheControl: false,
    setHeaders: (reply, path) => {
      const isHashed = /[\\/]assets[\\/].*-[\w-]{8,}\.\w+$/.test(path)
      reply.header('cache-control', isHashed ? 'public, max-age=31536000, immutable' : 'no-cache')
    },
  })
  // Share links read /share, without the ending of a file.
  if (existsSync(join(webDir, 'share.html')))
    app.get('/share', { schema: { hide: true } }, async (_request, reply) => reply.sendFile('share.html'))
}
