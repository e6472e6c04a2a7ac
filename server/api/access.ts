import { createHash, randomBytes, timingSafeEqual } from 'node:crypto'
import type { FastifyRequest } from 'fastify'
import { Fault } from '../errors.ts'
import type { Link } from '../store/link-store.ts'
import type { Store } from '../store/store.ts'
import type { Api } from './api.ts'

/** Whom an address answers: everybody, holders of a share link, or the owner alone. */
export type Access = 'open' | 'share' | 'owner'

declare module 'fastify' {
  interface FastifyContextConfig {
    /** Left out: under /api the owner alone, elsewhere everybody. */
    access?: Access
  }
}

/** Who asks. `link` is null for the service itself. */
export interface Visitor {
  link: Link | null
  /** What the visitor may do; teams bring more roles. */
  role: string
}

/** Cookies of a browser: the owner's, and that of a share page beside it. */
export const COOKIES = { owner: 'stagewatt', share: 'stagewatt-share' }

/** A secret that nobody guesses, 256 bits in 43 letters. */
export const newToken = (): string => randomBytes(32).toString('base64url')

/** What is kept of a secret. */
export const hashOf = (token: string): string => createHash('sha256').update(token).digest('hex')

const visitors = new WeakMap<FastifyRequest, Visitor>()

/** Id of the link by which somebody asks; null for the service itself. */
export const linkOf = (request: FastifyRequest): string | null => visitors.get(request)?.link?.id ?? null

/** The share link by which somebody asks; null for everybody else. */
export function shareOf(request: FastifyRequest): (Link & { raceId: string; date: string }) | null {
  const link = visitors.get(request)?.link ?? null
  const { raceId = null, date = null } = link ?? {}
  return link === null || raceId === null || date === null ? null : { ...link, raceId, date }
}

/**
 * Answers only those whom an address is for. A new address under /api is the owner's until it says otherwise.
 *
 * @param ownToken  secret by which the service calls itself before it listens
 */
export function guardAccess(app: Api, { store, ownToken }: { store: Store; ownToken: string }): void {
  app.addHook('onRequest', async (request) => {
    const access = accessOf(request)
    if (access === 'open') return
    const visitor = await visitorOf(request, { store, ownToken, access })
    visitors.set(request, visitor)
    if (access === 'owner' && visitor.role !== 'planner')
      throw new Fault('not-shared', 'This link opens one day’s budget and nothing else.')
  })
}

function accessOf({ routeOptions, url }: FastifyRequest): Access {
  const own = routeOptions.config.access
  if (own !== undefined) return own
  // Files answer whatever no route does, also under /api.
  return [routeOptions.url ?? '', url.split('?')[0]].some((path) => /^\/api(?:\/|$)/.test(path)) ? 'owner' : 'open'
}

interface Door {
  store: Store
  ownToken: string
  access: Access
}

async function visitorOf(request: FastifyRequest, { store, ownToken, access }: Door): Promise<Visitor> {
  const token = /^Bearer +([\w-]{1,200})$/i.exec(request.headers.authorization ?? '')?.[1]
  if (token !== undefined) {
    if (isSame(token, ownToken)) return { link: null, role: 'planner' }
    return byLink(await store.links.findByToken(hashOf(token)))
  }
  for (const name of access === 'share' ? [COOKIES.share, COOKIES.owner] : [COOKIES.owner]) {
    const cookie = cookieOf(request, name)
    const session = cookie === null ? null : await store.sessions.find(hashOf(cookie))
    if (session !== null) return { link: session.link, role: session.link.role }
  }
  throw notSignedIn('Open the owner’s link, or send its token as "Authorization: Bearer …".')
}

/** What a token opens. */
export function byLink(link: Link | null): Visitor {
  if (link === null) throw notSignedIn('No link has this token; ask for a new one.')
  if (!link.isRevoked) return { link, role: link.role }
  throw new Fault('link-revoked', 'This link was revoked; ask for a new one.', { headers: CHALLENGE })
}

const CHALLENGE = { 'www-authenticate': 'Bearer realm="Stagewatt"' }

const notSignedIn = (detail: string): Fault => new Fault('not-signed-in', detail, { headers: CHALLENGE })

/** Compared by hash, so that time tells nothing. */
const isSame = (a: string, b: string): boolean =>
  timingSafeEqual(createHash('sha256').update(a).digest(), createHash('sha256').update(b).digest())

/** A cookie of a request; null without it. */
export function cookieOf({ headers }: FastifyRequest, name: string): string | null {
  const cookies = (headers.cookie ?? '').split(';').map((one) => one.trim())
  return cookies.find((one) => one.startsWith(`${name}=`))?.slice(name.length + 1) ?? null
}
