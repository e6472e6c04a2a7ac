import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { carExample } from '../../server/api/examples/car.ts'
import { COAST_TABLE, coastExample } from '../../server/api/examples/coast-down.ts'
import { type Service, saving, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
  await service.ask(saving('car', 'weaver-2'))
})
afterAll(() => service.close())

const AIR = 'temperatureC=18&pressureHpa=884&humidityPct=35'

const sent = (type: string, payload: string, query = '') =>
  service.ask({ method: 'POST', url: `/api/v1/coast-down${query}`, headers: { 'content-type': type }, payload })
const asJson = (document: unknown, query = '') => sent('application/json', JSON.stringify(document), query)
const asTable = (text: string, query: string) => sent('text/csv', text, `?${query}`)

describe('a coast-down test', () => {
  test('as a document and as a table gives the same figures', async () => {
    const [one, other] = [await asJson(coastExample), await asTable(COAST_TABLE, `massKg=268&${AIR}`)]
    expect([one.statusCode, other.statusCode]).toEqual([200, 200])
    const { runs: _, ...figures } = one.json().result
    expect(other.json().result).toMatchObject(figures)
    // The runs were drawn with 0.0041 and 0.118 m².
    expect(Math.abs(figures.rollingCoefficient.value - 0.0041)).toBeLessThan(2.5 * figures.rollingCoefficient.sd)
    expect(Math.abs(figures.dragAreaM2.value - 0.118)).toBeLessThan(2.5 * figures.dragAreaM2.sd)
    expect(figures.car).toBeNull()
  })

  test('of a stored car takes its mass, and tells the version that it read', async () => {
    const { result } = (await asTable(COAST_TABLE, `car=weaver-2&${AIR}`)).json()
    expect(result).toMatchObject({
      car: { id: 'weaver-2', version: 1, name: 'Weaver 2' },
      massKg: carExample.body.massKg,
    })
    expect(result.rollingPerKmh.isHeld).toBe(true)
  })

  test('changes nothing that is stored', async () => {
    await asTable(COAST_TABLE, `car=weaver-2&${AIR}`)
    const { items } = (await service.ask({ url: '/api/v1/cars' })).json()
    expect(items).toHaveLength(1)
    expect(items[0]).toMatchObject({ id: 'weaver-2', version: 1 })
  })

  test('as a table may be mapped, and says what was done on its own', async () => {
    const strange = COAST_TABLE.replace('time (s),speed (km/h),run,direction', 'Zeit,Tempo,Fahrt,mood')
    const columns = { time: 'Zeit', speedKmh: 'Tempo', run: 'Fahrt' }
    const options = encodeURIComponent(JSON.stringify({ columns, units: { speedKmh: 'km/h' } }))
    const query = `massKg=268&${AIR}&directions=alternate&options=${options}`
    const answer = await asTable(strange, query)
    expect(answer.json().notices).toContainEqual({ detail: 'columns not read: mood' })
    expect(answer.json().result.runs.map(({ direction }: { direction: string }) => direction)).toEqual([
      'there',
      'back',
      'there',
      'back',
    ])
  })
})

describe('what is wrong is refused:', () => {
  test('runs that do not tell rolling from drag, with every reason', async () => {
    const oneWay = { ...coastExample, runs: coastExample.runs.filter((run) => run.direction === 'there') }
    const answer = await asJson(oneWay)
    expect(answer.json()).toMatchObject({ status: 422, code: 'cannot-fit', errors: [{ field: 'runs' }] })
    expect(answer.json().errors[0].detail).toContain('2 of 2 runs go one way')
    const short = coastExample.runs.map((run) => ({
      ...run,
      timeS: run.timeS.slice(0, 9),
      speedKmh: run.speedKmh.slice(0, 9),
    }))
    const narrow = (await asJson({ ...coastExample, runs: short })).json()
    expect(narrow.code).toBe('cannot-fit')
    expect(narrow.errors[0].detail).toMatch(/falls from \d+ to \d+ km\/h.*(?:would tell|log more runs)/)
  })

  test('a table by line and column', async () => {
    const answer = await asTable(COAST_TABLE.replace('\n10,', '\nten,'), `massKg=268&${AIR}`)
    expect(answer.json()).toMatchObject({
      status: 422,
      code: 'invalid-file',
      errors: [{ line: 4, column: 1, value: '"ten"' }],
    })
  })

  test('unknown air, by name', async () => {
    const answer = await asTable(COAST_TABLE, 'massKg=268&temperatureC=20')
    expect(answer.json()).toMatchObject({ status: 422, code: 'invalid-document', errors: [{ field: 'air' }] })
    expect(answer.json().errors[0].detail).toContain('densityKgM3')
  })

  test('an unknown mass, and a car that is not there', async () => {
    expect((await asTable(COAST_TABLE, AIR)).json()).toMatchObject({ status: 422, errors: [{ field: 'massKg' }] })
    const answer = await asTable(COAST_TABLE, `car=nobody&${AIR}`)
    expect(answer.json()).toMatchObject({ status: 422, code: 'missing-document', errors: [{ field: 'car.id' }] })
  })

  test.each([
    ['massKg=heavy', 'massKg'],
    ['temperatureC=99', 'temperatureC'],
    ['directions=both', 'directions'],
    ['mood=good', 'mood'],
    ['options={"mood":1}', 'mood'],
    ['car=No%20Such', 'car'],
  ])('?%s', async (query, field) => {
    const answer = await asTable(COAST_TABLE, query)
    expect(answer.json()).toMatchObject({ status: 400, code: 'bad-query' })
    expect(answer.json().errors.map((error: { field: string }) => error.field)).toContain(field)
  })

  test('options beside a document, an empty body, another kind of body', async () => {
    expect((await asJson(coastExample, '?massKg=268')).json()).toMatchObject({
      code: 'bad-query',
      errors: [{ field: 'massKg' }],
    })
    expect((await asTable('', `massKg=268&${AIR}`)).json()).toMatchObject({ status: 400, code: 'empty-body' })
    expect((await sent('application/gpx+xml', '<gpx/>')).json()).toMatchObject({ status: 415 })
  })
})
