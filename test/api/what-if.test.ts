import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { saving, type Service, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
  await service.ask(saving('car', 'weaver-2'))
})
afterAll(() => service.close())

const ask = (body: object) =>
  service.ask({
    method: 'POST',
    url: '/api/v1/what-if',
    headers: { 'content-type': 'application/json' },
    payload: JSON.stringify(body),
  })
const example = { variants: [], ...EXAMPLES['what-if-request'].document }

describe('changes to a day', () => {
  test('are answered each beside the base, and said to be approximate', async () => {
    const answer = await ask(example)
    expect(answer.statusCode).toBe(200)
    const { base, variants, method, text } = answer.json()
    expect(method).toMatch(/^Approximate/)
    expect(text).toMatch(/^Without any change the day’s road ends \d\d:\d\d at the earliest\.$/)
    expect(variants.map((one: { name: string }) => one.name)).toEqual([
      'A tenth less sun',
      'Headwind of 2 m/s more',
      'A flat tyre',
    ])
    for (const { arriveAt, laterMin } of variants)
      expect(Math.abs(Date.parse(arriveAt) - Date.parse(base.arriveAt) - laterMin * 60_000)).toBeLessThanOrEqual(1000)
    // Eight minutes of stop are later at least by what they do not bring back as speed.
    expect(variants[2].laterMin).toBeGreaterThan(0)
  })

  test('take a close that is wanted by so much more for the close that it comes to', async () => {
    const variants = [
      { name: 'By', change: { closePct: 3 } },
      { name: 'To', change: { targetPct: 83 } },
      { name: 'Both', change: { targetPct: 80, closePct: 3 } },
      { name: 'Less', change: { closePct: -3 } },
    ]
    const answer = await ask({ ...example, targetPct: 80, variants })
    const [by, to, both, less] = answer.json().variants
    expect(by.laterMin).toBeGreaterThan(0.5)
    for (const same of [to, both]) {
      expect(same.laterMin).toBeCloseTo(by.laterMin, 4)
      expect(same.closingWh).toBeCloseTo(by.closingWh, 2)
    }
    expect(less.laterMin).toBeLessThan(-0.5)
  })

  test('may name stored documents', async () => {
    const answer = await ask({ ...example, car: { id: 'weaver-2' } })
    expect(answer.statusCode).toBe(200)
  })

  test.each([
    [
      'a tracker that the car does not have',
      { trackerOff: 'attic' },
      'cannot-forecast',
      'variants[0].change.trackerOff',
    ],
    ['a number out of its range', { sunPct: 0 }, 'invalid-document', 'variants[0].change.sunPct'],
  ])('are refused with %s, by its field', async (_what, change, code, field) => {
    const answer = await ask({ ...example, variants: [{ name: 'One', change }] })
    expect(answer.statusCode).toBeGreaterThanOrEqual(400)
    expect(answer.json().code).toBe(code)
    expect(answer.json().errors[0].field).toBe(field)
  })
})
