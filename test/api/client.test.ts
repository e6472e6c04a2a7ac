import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, expect, test } from 'vitest'
import type { Api } from '../../server/api/api.ts'
import { type Service, startService } from './service.ts'

let service: Service
let app: Api
let webDir: string
beforeAll(async () => {
  webDir = mkdtempSync(join(tmpdir(), 'stagewatt-web-'))
  mkdirSync(join(webDir, 'assets'))
  writeFileSync(join(webDir, 'index.html'), '<!doctype html><title>Stagewatt</title>')
  writeFileSync(join(webDir, 'assets', 'main-D4f8Jk2q.js'), `// ${'long '.repeat(1000)}`)
  service = await startService()
  app = await service.another({ webDir })
})
afterAll(async () => {
  await service.close()
  rmSync(webDir, { recursive: true, force: true })
})

test('the client’s page is asked for again each time, its hashed files never', async () => {
  const page = await app.inject('/')
  expect(page.statusCode).toBe(200)
  expect(page.headers).toMatchObject({
    'cache-control': 'no-cache',
    'content-type': expect.stringContaining('text/html'),
  })
  const script = await app.inject('/assets/main-D4f8Jk2q.js')
  expect(script.headers['cache-control']).toBe('public, max-age=31536000, immutable')
})

test('long answers are packed for those who can unpack them', async () => {
  const packed = await app.inject({ url: '/assets/main-D4f8Jk2q.js', headers: { 'accept-encoding': 'gzip' } })
  expect(packed.headers['content-encoding']).toBe('gzip')
  const description = await app.inject({ url: '/api/openapi.json', headers: { 'accept-encoding': 'br' } })
  expect(description.headers['content-encoding']).toBe('br')
})

test.each(['/assets/lost.js', '/../package.json', '/%2e%2e/package.json', '/.env'])('%s is not there', async (url) => {
  const answer = await app.inject(url)
  expect(answer.statusCode).toBe(404)
  expect(answer.headers['content-type']).toContain('application/problem+json')
})

test('a service without a built client answers the API all the same', async () => {
  expect((await service.app.inject('/')).statusCode).toBe(404)
  expect((await service.app.inject('/api/health')).statusCode).toBe(200)
})
