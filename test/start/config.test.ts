import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import { CONFIG, isLoopback, readConfig, reachOf } from '../../server/config.ts'

const read = (env: Record<string, string>) => readConfig(env, '/crew')

describe('the configuration', () => {
  test('needs nothing to be set', () => {
    const { config } = read({})
    expect(config).toMatchObject({
      host: '127.0.0.1',
      port: 8440,
      publicOrigin: null,
      databaseUrl: null,
      dataDir: '/crew/data',
      tls: null,
      logLevel: 'warn',
      computeLimitMs: 20_000,
    })
    expect(config?.computeWorkers).toBeGreaterThanOrEqual(2)
    expect(config?.computeWorkers).toBeLessThanOrEqual(4)
  })

  test('takes what is set; an empty value counts as not set', () => {
    const { config } = read({
      HOST: '0.0.0.0',
      PORT: '0',
      PUBLIC_URL: 'https://crew.example/',
      DATABASE_URL: 'postgres://crew:secret@db:5432/stagewatt',
      DATA_DIR: '/var/lib/stagewatt',
      TLS_CERT: 'cert.pem',
      TLS_KEY: '/etc/key.pem',
      LOG_LEVEL: '',
      COMPUTE_WORKERS: '3',
      COMPUTE_LIMIT_S: '60',
    })
    expect(config).toEqual({
      host: '0.0.0.0',
      port: 0,
      publicOrigin: 'https://crew.example',
      databaseUrl: 'postgres://crew:secret@db:5432/stagewatt',
      dataDir: '/var/lib/stagewatt',
      tls: { certPath: '/crew/cert.pem', keyPath: '/etc/key.pem' },
      logLevel: 'warn',
      computeWorkers: 3,
      computeLimitMs: 60_000,
    })
  })

  test.each([
    ['HOST', 'a b'],
    ['PORT', '65536'],
    ['PORT', '84x'],
    ['PORT', '-1'],
    ['PUBLIC_URL', 'crew.example'],
    ['PUBLIC_URL', 'https://crew.example/app'],
    ['LOG_LEVEL', 'loud'],
    ['COMPUTE_WORKERS', '0'],
    ['COMPUTE_LIMIT_S', '1.5'],
  ])('%s=%s is refused in one line with name, value and expectation', (name, value) => {
    const { problems } = read({ [name]: value })
    expect(problems).toHaveLength(1)
    const row = CONFIG.find((entry) => entry.name === name)
    expect(problems?.[0]).toBe(`${name} is ${JSON.stringify(value)}; expected ${row?.expected}.`)
  })

  test('a wrong DATABASE_URL is refused without repeating it', () => {
    const { problems } = read({ DATABASE_URL: 'mysql://crew:secret@db/stagewatt' })
    expect(problems).toHaveLength(1)
    expect(problems?.[0]).toContain('DATABASE_URL is not an address; expected an address as postgres://')
    expect(problems?.[0]).not.toContain('secret')
  })

  test.each([
    ['TLS_CERT', 'TLS_KEY'],
    ['TLS_KEY', 'TLS_CERT'],
  ])('%s without %s is refused', (given, missing) => {
    expect(read({ [given]: 'file.pem' }).problems?.[0]).toContain(
      `${missing} is not set; expected a path, together with`,
    )
  })

  test('every wrong variable is named at once', () => {
    expect(read({ PORT: 'x', LOG_LEVEL: 'y', TLS_KEY: 'z' }).problems).toHaveLength(3)
  })

  test('the table of variables is what the code reads', () => {
    const code = readFileSync(new URL('../../server/config.ts', import.meta.url), 'utf8')
    const read = [...code.matchAll(/^ {2}([A-Z][A-Z_]+): /gm)].map((found) => found[1])
    expect(CONFIG.map(({ name }) => name)).toEqual(read)
  })

  test.each([
    ['only this machine', {}, 'Phones do not reach this address'],
    ['a public name for this machine alone', { PUBLIC_URL: 'http://localhost:8440' }, 'Phones do not reach PUBLIC_URL'],
    ['the network over plain HTTP', { HOST: '0.0.0.0' }, 'cannot work offline'],
    ['a proxy over plain HTTP', { PUBLIC_URL: 'http://crew.example' }, 'cannot work offline'],
    ['the network over https', { HOST: '0.0.0.0', TLS_CERT: 'c.pem', TLS_KEY: 'k.pem' }, ''],
    ['a proxy over https', { PUBLIC_URL: 'https://crew.example' }, ''],
  ])('what reaches %s says what phones cannot do: %s', (_, env, expected) => {
    const { config } = read(env)
    if (config === undefined) throw new Error('the variables are refused')
    expect(reachOf(config).join('')).toContain(expected)
    expect(reachOf(config)).toHaveLength(expected === '' ? 0 : 1)
  })

  test.each([
    ['127.0.0.1', true],
    ['127.8.9.1', true],
    ['::1', true],
    ['localhost', true],
    ['0.0.0.0', false],
    ['::', false],
    ['192.168.1.2', false],
    ['localhost.example', false],
  ])('%s is reached from this machine only: %s', (host, expected) => {
    expect(isLoopback(host)).toBe(expected)
  })
})
