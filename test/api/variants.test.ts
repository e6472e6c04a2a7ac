import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { carExample } from '../../server/api/examples/car.ts'
import { ifVersion, saving, type Service, startService } from './service.ts'

let service: Service
let planId: string
beforeAll(async () => {
  service = await startService()
  await service.ask(saving('car', 'weaver-2'))
  await service.ask(saving('route', 'saltpan-twin-wells'))
  await service.ask(saving('sky', 'friday'))
  await service.ask(saving('race', 'plateau'))
  const ordered = await post('/api/v1/races/plateau/plans', wanted)
  planId = (await settled(`/api/v1/plans/${ordered.json().id}`)).id
})
afterAll(() => service.close())

const wanted = { carId: 'weaver-2', skyId: 'friday', date: '2026-10-17', members: 200 }
const post = (url: string, body: object) =>
  service.ask({ method: 'POST', url, headers: { 'content-type': 'application/json' }, payload: JSON.stringify(body) })
const order = (variants: object[], id = planId) => post(`/api/v1/plans/${id}/variants`, { variants })

/** What an address tells once it is no longer worked on. */
async function settled(url: string) {
  for (;;) {
    const found = (await service.ask({ method: 'GET', url })).json()
    if (found.state !== 'working') return found
    await new Promise((done) => setTimeout(done, 50))
  }
}

describe('variants beside a stored plan', { timeout: 60_000 }, () => {
  const less = { name: 'Less sun', change: { sunPct: 80 } }

  test('are worked out in the background and kept beside the plan that they were ordered for', async () => {
    const ordered = await order([less, { name: 'The same' }])
    expect(ordered.statusCode).toBe(202)
    const [first, second] = ordered.json().items
    expect(first).toMatchObject({ planId, name: 'Less sun', variant: less, state: 'working', answer: null })
    const done = await settled(`/api/v1/variants/${first.id}`)
    expect(done).toMatchObject({ state: 'done', fault: null })
    expect(done.answer.laterMin).toBeGreaterThan(0)
    expect(done.inputsHash).toMatch(/^[0-9a-f]{64}$/)
    const same = await settled(`/api/v1/variants/${second.id}`)
    const { plan } = (await service.ask({ url: `/api/v1/plans/${planId}` })).json()
    expect(same.answer).toMatchObject({ laterMin: 0, arrivalCauses: [] })
    expect(same.answer.figures).toMatchObject({
      arriveAt: plan.forPeople.arriveAt,
      closingWh: plan.forPeople.closingWh,
      touchesReservePct: plan.ranges.touchesReservePct,
    })
    const listed = (await service.ask({ url: `/api/v1/plans/${planId}/variants` })).json()
    expect(listed.items.map(({ id }: { id: string }) => id)).toEqual([second.id, first.id])
    expect(listed.items[1]).toEqual(done)
  })

  test('that were ordered before are there at once', async () => {
    const [first] = (await order([less])).json().items
    await settled(`/api/v1/variants/${first.id}`)
    const again = await order([less])
    expect(again.statusCode).toBe(200)
    expect(again.json().items[0]).toMatchObject({ id: first.id, state: 'done' })
  })

  test('can be taken back while they are worked on, and ordered again', async () => {
    const wind = { name: 'Wind', change: { headwindMps: 3, massKg: 10 } }
    const [{ id }] = (await order([wind])).json().items
    const taken = await service.ask({ method: 'DELETE', url: `/api/v1/variants/${id}` })
    expect(taken.json().state).toBe('cancelled')
    expect((await order([wind])).json().items[0]).toMatchObject({ id, state: 'working' })
    const done = await settled(`/api/v1/variants/${id}`)
    expect(done.answer.arrivalCauses.slice(0, 2).map((cause: { id: string }) => cause.id)).toEqual([
      'headwindMps',
      'massKg',
    ])
  })

  test('tell the stream of the day how far they are', async () => {
    const drag = { name: 'Drag', change: { dragAreaPct: 105, rollingPct: 102 } }
    const [{ id }] = (await order([drag])).json().items
    await settled(`/api/v1/variants/${id}`)
    const told = async () => {
      const rows = await service.database.sql<{ data: { variantId: string; state: string; step?: string } }[]>`
        select data from events where topic = 'plateau/2026-10-17' and kind = 'variant' order by id`
      return rows.map(({ data }) => data).filter(({ variantId }) => variantId === id)
    }
    while ((await told()).at(-1)?.state === 'working') await new Promise((done) => setTimeout(done, 50))
    expect((await told()).map(({ state, step }) => step ?? state)).toEqual([
      'Waiting its turn',
      'Planning the base',
      'Planning with Drag area 105 %',
      'Planning with Rolling 102 %',
      'done',
    ])
  })

  test('that do not fit together fail in words that name the variant', async () => {
    const [{ id }] = (await order([{ name: 'No nose', change: { trackerOff: 'attic' } }])).json().items
    const failed = await settled(`/api/v1/variants/${id}`)
    expect(failed).toMatchObject({ state: 'failed', fault: { code: 'cannot-forecast' } })
    expect(failed.fault.detail).toMatch(/^The variant "No nose", change\.trackerOff: "attic" given; expected one of /)
  })

  test('are refused before they are begun where a patch makes a wrong document', async () => {
    const refused = await order([less, { name: 'Feather', car: { body: { massKg: -1 } } }])
    expect(refused.statusCode).toBe(422)
    expect(refused.json()).toMatchObject({
      code: 'invalid-document',
      detail: 'The variant "Feather" has 1 problem.',
      errors: [{ field: 'variants[1].car.body.massKg', value: '-1' }],
    })
  })

  test('need a plan that is done and made from what is stored now', async () => {
    const none = '00000000-0000-4000-8000-000000000001'
    expect((await order([less], none)).json().code).toBe('no-such-plan')
    expect((await service.ask({ url: `/api/v1/variants/${none}` })).json().code).toBe('no-such-variant')
    const { id } = (await post('/api/v1/races/plateau/plans', { ...wanted, seed: 5 })).json()
    await service.ask({ method: 'DELETE', url: `/api/v1/plans/${id}` })
    expect((await order([less], id)).json().code).toBe('plan-unfinished')
    const heavier = { ...carExample, body: { ...carExample.body, massKg: carExample.body.massKg + 1 } }
    await service.ask(ifVersion(saving('car', 'weaver-2', heavier), 1))
    const outdated = await order([less])
    expect(outdated.statusCode).toBe(409)
    expect(outdated.json().detail).toMatch(/^Race, car, sky, readings or the engine have changed since this plan/)
    await service.ask(ifVersion(saving('car', 'weaver-2'), 2))
    expect((await order([less])).statusCode).toBe(200)
  })
})

describe('variants of whole documents', { timeout: 60_000 }, () => {
  const example = { variants: [], ...EXAMPLES['variants-request'].document, members: 100 }

  test('need nothing saved', async () => {
    const answer = await post('/api/v1/variants', example)
    expect(answer.statusCode).toBe(200)
    const { base, variants, members } = answer.json()
    expect(members).toBe(100)
    expect(base.outcome.kind).toBe('planned')
    expect(variants.map(({ name }: { name: string }) => name)).toEqual([
      'Lighter by 15 kg',
      'Less sun, flat tyre',
      'Held at 62 km/h',
    ])
    for (const { figures, energyCauses } of variants) {
      const sum = energyCauses.reduce((all: number, { wh }: { wh: number }) => all + wh, 0)
      expect(Math.abs(sum - (figures.closingWh - base.figures.closingWh))).toBeLessThan(1e-6)
    }
    expect(variants[2].outcome.kind).toBe('forecast')
  })

  test.each([
    ['a field that nobody knows', { colour: 'red' }, 'variants[0].car.colour'],
    ['a list in place of the body', { body: [] }, 'variants[0].car.body'],
  ])('are refused with %s, by its field', async (_what, car, field) => {
    const answer = await post('/api/v1/variants', { ...example, variants: [{ name: 'One', car }] })
    expect(answer.statusCode).toBe(422)
    expect(answer.json().errors[0].field).toBe(field)
  })
})
