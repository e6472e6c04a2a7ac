import { z } from 'zod'
import { checked, readJson } from '../compute/read-json.ts'
import { Fault } from '../errors.ts'
import { byLink, COOKIES, cookieOf, hashOf, newToken } from './access.ts'
import { answers, STORE_ERRORS, WRITE_ERRORS } from './answers.ts'
import type { Api, Needs } from './api.ts'
import { bytesOf, takeBodies } from './content.ts'

/** How long a browser stays signed in. [s] */
const SESSION_S = 90 * 24 * 3600

const signIn = z.strictObject({ token: z.string().min(1).max(200).describe('what stands after # in the link') })

const signedIn = z.strictObject({
  kind: z.enum(['owner', 'share']),
  role: z.string(),
  name: z.string(),
  raceId: z.string().nullable().describe('race of a share link'),
  date: z.string().nullable().describe('day of a share link'),
})

/** Exchanging a link for a cookie, and giving it back. */
export function sessionRoutes(api: Api, { store }: Needs, { isHttps }: { isHttps: boolean }): void {
  takeBodies(api, ['json'])
  const schema = {
    tags: ['access'],
    summary: 'Exchange a link’s token for a cookie',
    description: 'Scripts need no cookie: they send the token as "Authorization: Bearer …".',
    querystring: z.strictObject({}),
    body: signIn,
    response: answers(
      { 200: { description: 'signed in', schema: signedIn } },
      [
        'bad-query',
        'bad-json',
        'empty-body',
        'invalid-document',
        'not-signed-in',
        'link-revoked',
        ...WRITE_ERRORS,
        ...STORE_ERRORS,
      ],
      'open',
    ),
  }
  api.post('/sessions', { schema, config: { access: 'open' } }, async (request, reply) => {
    const { token } = checked(signIn, readJson(bytesOf(request.body)), 'sign-in')
    const { link } = byLink(await store.links.findByToken(hashOf(token)))
    if (link === null) throw new Fault('not-signed-in', 'No link has this token; ask for a new one.')
    const secret = newToken()
    const isMade = await store.sessions.create(link.id, hashOf(secret), new Date(Date.now() + SESSION_S * 1000))
    if (!isMade) throw new Fault('link-revoked', 'This link was revoked; ask for a new one.')
    await store.sessions.prune()
    const { kind, role, name, raceId, date } = link
    reply.header('set-cookie', cookie(kind, secret, SESSION_S)).header('cache-control', 'no-store')
    return { kind, role, name, raceId, date }
  })

  const cookie = (kind: 'owner' | 'share', value: string, seconds: number): string => {
    const path = kind === 'owner' ? '/' : '/api/v1/share'
    const parts = [`${COOKIES[kind]}=${value}`, `Path=${path}`, `Max-Age=${seconds}`, 'HttpOnly', 'SameSite=Strict']
    return [...parts, ...(isHttps ? ['Secure'] : [])].join('; ')
  }
  signOutRoute(api, { store }, cookie('owner', '', 0))
}

function signOutRoute(api: Api, { store }: Pick<Needs, 'store'>, gone: string): void {
  const schema = {
    tags: ['access'],
    summary: 'Sign this browser out',
    querystring: z.strictObject({}),
    response: answers({ 204: { description: 'signed out' } }, [
      'bad-query',
      'other-host',
      'other-origin',
      ...STORE_ERRORS,
    ]),
  }
  api.delete('/sessions', { schema }, async (request, reply) => {
    const secret = cookieOf(request, COOKIES.owner)
    if (secret !== null) await store.sessions.remove(hashOf(secret))
    return reply.code(204).header('set-cookie', gone).send()
  })
}
