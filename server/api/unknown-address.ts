import type { FastifyRequest } from 'fastify'
import { Fault } from '../errors.ts'
import type { Api } from './api.ts'

/**
 * Tells an address that exists under other methods (405, with Allow) from one that does not exist (404).
 * Call it before the routes are added.
 */
export function answerUnknown(app: Api): void {
  const known = new Map<string, { matches: RegExp; methods: Set<string> }>()
  app.addHook('onRoute', ({ url, method }) => {
    const entry = known.get(url) ?? { matches: pattern(url), methods: new Set<string>() }
    for (const one of [method].flat()) entry.methods.add(one)
    known.set(url, entry)
  })
  app.setNotFoundHandler((request) => {
    const path = request.url.split('?')[0]
    const methods = [...known.values()]
      .filter(({ matches }) => matches.test(path))
      .flatMap((entry) => [...entry.methods])
    throw methods.length === 0 ? nothingAt(request, path) : wrongMethod(request, [...new Set(methods)])
  })
}

const pattern = (url: string): RegExp =>
  new RegExp(`^${url.replace(/[.*+?^${}()|[\]\\]/g, '\\$&').replace(/:\w+/g, '[^/]+')}$`)

function nothingAt({ method }: FastifyRequest, path: string): Fault {
  const hint = path.startsWith('/api') ? ' The addresses are described at /api/docs.' : ''
  return new Fault('not-found', `${method} ${path.slice(0, 200)}: there is nothing at this address.${hint}`)
}

const wrongMethod = ({ method }: FastifyRequest, methods: string[]): Fault =>
  new Fault('method-not-allowed', `This address does not know ${method}; expected ${methods.join(' or ')}.`, {
    headers: { allow: methods.join(', ') },
  })
