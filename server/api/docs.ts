import { readFileSync } from 'node:fs'
import type { Api } from './api.ts'
import { type ApiDescription, docsPage } from './docs-page.ts'

/** The description of the API, as OpenAPI 3.1 and as a page for people. Both are made once. */
export function docsRoutes(app: Api, cssPath: string): void {
  const css = readFileSync(cssPath)
  let made: { json: string; page: string } | null = null
  const make = () => {
    const json = JSON.stringify(app.swagger())
    const description: ApiDescription = JSON.parse(json)
    return { json, page: docsPage(description) }
  }
  app.addHook('onReady', async () => {
    made = make()
  })
  const hidden = { hide: true }
  app.get('/api/openapi.json', { schema: hidden }, async (_request, reply) =>
    reply.type('application/json; charset=utf-8').header('cache-control', 'no-cache').send(made?.json),
  )
  app.get('/api/docs', { schema: hidden }, async (_request, reply) =>
    reply.type('text/html; charset=utf-8').header('cache-control', 'no-cache').send(made?.page),
  )
  app.get('/api/docs.css', { schema: hidden }, async (_request, reply) =>
    reply.type('text/css; charset=utf-8').header('cache-control', 'no-cache').send(css),
  )
}
