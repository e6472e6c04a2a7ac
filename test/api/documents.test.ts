import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { carExample } from '../../server/api/examples/car.ts'
import { ifVersion, saving, type Service, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
})
afterAll(() => service.close())

const renamed = (kind: string, name: string): object => ({ ...EXAMPLES[kind].document, name })

describe.each([
  ['car', 'cars'],
  ['route', 'routes'],
  ['race', 'races'],
  ['sky', 'skies'],
])('a %s', (kind, path) => {
  const url = `/api/v1/${path}/weaverbird`

  test('is created once and tells its version and address', async () => {
    const answer = await service.ask(saving(kind, 'weaverbird'))
    expect(answer.statusCode).toBe(201)
    expect(answer.headers).toMatchObject({ location: url, etag: '"1"' })
    const { name } = { name: '', ...EXAMPLES[kind].document }
    expect(answer.json()).toMatchObject({ id: 'weaverbird', name, version: 1, notices: [] })
  })

  test('comes back with its defaults filled in', async () => {
    const answer = await service.ask({ url })
    expect(answer.headers).toMatchObject({ etag: '"1"', 'cache-control': 'no-cache' })
    expect(answer.json().document).toMatchObject(EXAMPLES[kind].document)
  })

  test('is not overwritten by somebody who has not read it', async () => {
    const answer = await service.ask(saving(kind, 'weaverbird', renamed(kind, 'blind')))
    expect(answer.statusCode).toBe(428)
    expect(answer.headers.etag).toBe('"1"')
    expect(answer.json()).toMatchObject({ code: 'precondition-required', errors: [{ field: 'If-Match' }] })
  })

  test('is replaced by its version, and a stale version is told the one that holds', async () => {
    const replaced = await service.ask(ifVersion(saving(kind, 'weaverbird', renamed(kind, 'second')), 1))
    expect(replaced.statusCode).toBe(200)
    expect(replaced.headers.etag).toBe('"2"')
    const stale = await service.ask(ifVersion(saving(kind, 'weaverbird', renamed(kind, 'third')), 1))
    expect(stale.statusCode).toBe(412)
    expect(stale.json().code).toBe('version-changed')
    expect(stale.json().detail).toContain('version 2')
    expect((await service.ask({ url })).json().name).toBe('second')
  })

  test('keeps its earlier versions', async () => {
    const first = await service.ask({ url: `${url}?version=1` })
    expect(first.json()).toMatchObject({ version: 1, document: EXAMPLES[kind].document })
    const { items } = (await service.ask({ url: `${url}/versions` })).json()
    expect(items).toMatchObject([
      { version: 2, name: 'second', isRemoved: false },
      { version: 1, isRemoved: false },
    ])
    expect((await service.ask({ url: `${url}?version=3` })).json().code).toBe('no-such-version')
  })

  test('stands in the list until it is taken away; its versions stay, its id is free', async () => {
    expect((await service.ask({ url: `/api/v1/${path}` })).json().items).toMatchObject([
      { id: 'weaverbird', version: 2 },
    ])
    const blind = await service.ask({ method: 'DELETE', url })
    expect(blind.statusCode).toBe(428)
    expect((await service.ask(ifVersion({ method: 'DELETE', url }, 1))).statusCode).toBe(412)
    expect((await service.ask(ifVersion({ method: 'DELETE', url }, 2))).statusCode).toBe(204)
    expect((await service.ask({ url })).json().code).toBe('no-such-document')
    expect((await service.ask({ url: `/api/v1/${path}` })).json().items).toEqual([])
    const { items } = (await service.ask({ url: `${url}/versions` })).json()
    expect(items).toMatchObject([
      { version: 2, isRemoved: true },
      { version: 1, isRemoved: false },
    ])
    expect((await service.ask(saving(kind, 'weaverbird'))).json().version).toBe(3)
  })
})

describe('preconditions', () => {
  beforeAll(async () => {
    await service.ask(saving('car', 'tagged'))
  })
  const url = '/api/v1/cars/tagged'

  test.each(['"1"', 'W/"1"', '"7", "1"', '*'])('a car that is known as %s is not sent again', async (tag) => {
    const answer = await service.ask({ url, headers: { 'if-none-match': tag } })
    expect(answer.statusCode).toBe(304)
    expect(answer.body).toBe('')
  })

  test('a car that is known in another version is sent', async () => {
    expect((await service.ask({ url, headers: { 'if-none-match': '"2"' } })).statusCode).toBe(200)
  })

  test.each(['1', '"one"', '"1', '"1","2"x', ''])('If-Match: %s is refused with what is expected', async (tag) => {
    const answer = await service.ask(ifVersion(saving('car', 'tagged'), tag))
    expect(answer.statusCode).toBe(400)
    expect(answer.json()).toMatchObject({ code: 'bad-precondition', errors: [{ field: 'If-Match' }] })
  })

  test('If-None-Match: * creates and never replaces', async () => {
    const request = {
      ...saving('car', 'only-new'),
      headers: { 'content-type': 'application/json', 'if-none-match': '*' },
    }
    expect((await service.ask(request)).statusCode).toBe(201)
    expect((await service.ask(request)).statusCode).toBe(412)
  })

  test('a list of versions and * replace what holds', async () => {
    await service.ask(saving('car', 'listed'))
    expect((await service.ask(ifVersion(saving('car', 'listed'), '"9", "1"'))).json().version).toBe(2)
    expect((await service.ask(ifVersion(saving('car', 'listed'), '*'))).json().version).toBe(3)
    expect((await service.ask(ifVersion(saving('car', 'listed'), '"9", "1"'))).statusCode).toBe(412)
  })

  test('a version of a car that is not there is stale', async () => {
    const answer = await service.ask(ifVersion(saving('car', 'nobody'), 1))
    expect(answer.json()).toMatchObject({ status: 412, code: 'version-changed' })
    const url = '/api/v1/cars/nobody'
    expect((await service.ask(ifVersion({ method: 'DELETE', url }, 1))).json().code).toBe('no-such-document')
  })

  test('of ten who replace the same version at once, one wins', async () => {
    await service.ask(saving('race', 'contested'))
    const attempts = Array.from({ length: 10 }, (_, i) =>
      service.ask(ifVersion(saving('race', 'contested', renamed('race', `by ${i}`)), 1)),
    )
    const statuses = (await Promise.all(attempts)).map((answer) => answer.statusCode)
    expect(statuses.sort((a, b) => a - b)).toEqual([200, ...Array.from({ length: 9 }, () => 412)])
    expect((await service.ask({ url: '/api/v1/races/contested/versions' })).json().items).toHaveLength(2)
  })

  test('of ten who create the same car at once, one wins', async () => {
    const answers = await Promise.all(Array.from({ length: 10 }, () => service.ask(saving('car', 'rushed'))))
    expect(answers.filter((answer) => answer.statusCode === 201)).toHaveLength(1)
    expect(answers.filter((answer) => answer.statusCode === 428)).toHaveLength(9)
  })
})

describe('a document with faults', () => {
  const send = (payload: string | Buffer) => service.ask({ ...saving('car', 'faulty'), payload })

  test('names every wrong field with its value and what was expected', async () => {
    const [nose, left, right, tail] = carExample.panels
    const panels = [nose, left, { ...right, pitchDeg: 95, colour: 'blue' }, tail]
    const answer = await send(JSON.stringify({ ...carExample, panels, body: { ...carExample.body, massKg: 'heavy' } }))
    expect(answer.statusCode).toBe(422)
    expect(answer.json()).toMatchObject({ code: 'invalid-document', detail: 'The car has 3 problems.' })
    expect(answer.json().errors).toEqual(
      expect.arrayContaining([
        { field: 'body.massKg', value: '"heavy"', detail: 'expected a number' },
        { field: 'panels[2].pitchDeg', value: '95', detail: 'expected at most 60' },
        { field: 'panels[2].colour', detail: 'unknown field; expected none of this name' },
      ]),
    )
  })

  test('that is no JSON names line and column', async () => {
    const answer = await send('{\n  "name": "Weaver 2",\n  "body": {,}\n}')
    expect(answer.statusCode).toBe(400)
    expect(answer.json()).toMatchObject({ code: 'bad-json', errors: [{ line: 3, column: 12, value: '","' }] })
  })

  test('that is empty, or no text, is refused', async () => {
    expect((await send('')).json()).toMatchObject({ status: 400, code: 'empty-body' })
    const broken = await send(Buffer.from([0x7b, 0x22, 0xff, 0xfe, 0x22, 0x7d]))
    expect(broken.json()).toMatchObject({ status: 400, code: 'bad-json', errors: [{ line: 1, column: 3 }] })
  })

  test('that holds what the database cannot keep names the field', async () => {
    const sky = { ...EXAMPLES.sky.document, name: 'half \ud83d a pair' }
    const answer = await service.ask(saving('sky', 'half', sky))
    expect(answer.json()).toMatchObject({ status: 422, code: 'invalid-document', errors: [{ field: 'name' }] })
  })

  test('changes nothing', async () => {
    expect((await service.ask({ url: '/api/v1/cars/faulty' })).statusCode).toBe(404)
    expect((await service.ask({ url: '/api/v1/skies/half' })).statusCode).toBe(404)
  })

  test.each(['Weaver', 'a_b', '-a', 'a'.repeat(65), '%20', 'a%2Fb'])('cannot be saved under the id %s', async (id) => {
    const answer = await service.app.inject(saving('car', id))
    expect(answer.statusCode).toBe(400)
    expect(answer.json()).toMatchObject({ code: 'bad-id', errors: [{ field: 'id' }] })
  })

  test.each([
    ['/api/v1/cars?page=2', 'page'],
    ['/api/v1/cars/tagged?version=0', 'version'],
    ['/api/v1/cars/tagged?version=1e3', 'version'],
    ['/api/v1/cars/tagged?version=', 'version'],
    ['/api/v1/cars/tagged?version=1&version=2', 'version'],
  ])('%s is refused for its query', async (url, field) => {
    expect((await service.ask({ url })).json()).toMatchObject({ status: 400, code: 'bad-query', errors: [{ field }] })
  })
})
