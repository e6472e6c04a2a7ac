import type { Api } from './api.ts'
import { Fault } from '../errors.ts'
import { isLoopback } from '../config.ts'

const CHANGING = new Set(['POST', 'PUT', 'PATCH', 'DELETE'])

/** Host of an address, without its port. */
const hostName = (host: string): string =>
  host
    .replace(/:\d+$/, '')
    .replace(/^\[(.*)\]$/, '$1')
    .toLowerCase()

/**
 * Keeps other sites from changing the plans through the browser of somebody who may.
 *
 * A service that only this machine reaches answers changes only under this machine's names (a foreign
 * name that resolves to it comes from another site), and a page's Origin must be the service's own.
 */
export function guardChanges(app: Api, { host, publicOrigin }: { host: string; publicOrigin: string | null }): void {
  const publicHost = publicOrigin === null ? null : new URL(publicOrigin).host.toLowerCase()
  app.addHook('onRequest', async (request) => {
    if (!CHANGING.has(request.method)) return
    const asked = request.headers.host ?? ''
    if (isLoopback(host) && !isLoopback(hostName(asked)) && asked.toLowerCase() !== publicHost)
      throw new Fault(
        'other-host',
        `This service listens on ${host} and does not know itself as "${asked.slice(0, 80)}"; set PUBLIC_URL if it should.`,
      )
    const { origin } = request.headers
    if (origin === undefined || origin === publicOrigin || originHost(origin) === asked.toLowerCase()) return
    throw new Fault('other-origin', `A page of ${origin.slice(0, 80)} may not change anything here.`)
  })
}

const originHost = (origin: string): string | null => (URL.canParse(origin) ? new URL(origin).host : null)
