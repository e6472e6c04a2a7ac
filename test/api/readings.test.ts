import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { raceDocument } from '../../server/documents/race.ts'
import { someCar, someRace, someRoute, someSky } from '../support/scenario.ts'
import { saving, type Service, startService } from './service.ts'

const DAY = '2026-10-17'
const RACE = '/api/v1/races/plateau'

/**
 * A parked day whose only income is two hours of noon sun into a pack without resistance, so that a watt lost in a
 * tracker is two watt-hours less at dusk.
 */
function noonRace() {
  const race = someRace()
  const [driven] = race.days
  const parked = { ...driven, stages: [], charging: [{ from: '12:00', to: '14:00' }], targetPct: undefined }
  return { ...race, openingPct: 20, days: [parked, { ...driven, date: '2026-10-18', targetPct: undefined }] }
}

/** Its trackers lose 10 W whatever they do, or so the crew believes, give or take 10 W; its meters hardly err. */
function standingCar() {
  const car = someCar()
  return {
    ...car,
    trackers: car.trackers.map((tracker) => ({
      ...tracker,
      losses: { standingW: 10, switchingPct: 0, conductionOhm: 0, rectifierV: 0 },
      lossesSpreadPct: 100,
    })),
    meters: [
      { name: 'volts', measures: 'V', accuracyPct: 0.01 },
      { name: 'clamp A', measures: 'A', accuracyPct: 0.01 },
      { name: 'clamp B', measures: 'A', accuracyPct: 0.01 },
    ],
    pack: { ...car.pack, cellOhm: 1e-5, leadsOhm: 0, coulombicPct: 100 },
  }
}

let serial = 0
const newId = (): string => `00000000-0000-4000-8000-${String(++serial).padStart(12, '0')}`

/** 40 W in and 18 W out at the deck tracker: 22 W lost where 10 W were believed. */
const worn = (more: object = {}) => ({
  id: newId(),
  tracker: 'deck tracker',
  at: `${DAY}T09:30:00+02:00`,
  inputV: 50,
  inputA: 0.8,
  outputV: 100,
  outputA: 0.18,
  meters: { inputV: 'volts', outputV: 'volts', inputA: 'clamp A', outputA: 'clamp B' },
  ...more,
})

let service: Service
const post = (url: string, body?: object) =>
  service.ask({
    method: 'POST',
    url,
    ...(body === undefined ? {} : { headers: { 'content-type': 'application/json' }, payload: JSON.stringify(body) }),
  })
const read = (body: object) => post(`${RACE}/readings`, body)
const get = async (url: string) => (await service.ask({ url })).json()
const closingWh = async (): Promise<number> => (await get(`${RACE}/days/${DAY}/budget`)).budget.days[0].closing.wh

beforeAll(async () => {
  service = await startService()
  expect(raceDocument.safeParse(noonRace()).error).toBeUndefined()
  for (const request of [
    saving('car', 'weaver-1', standingCar()),
    saving('route', 'road', someRoute()),
    saving('sky', 'clear', someSky()),
    saving('race', 'plateau', noonRace()),
  ])
    expect((await service.ask(request)).statusCode).toBe(201)
  const choice = { carId: 'weaver-1', skyId: 'clear', speeds: { kind: 'constant', speedKmh: 60 } }
  const chosen = await service.ask({
    method: 'PUT',
    url: `${RACE}/days/${DAY}/choice`,
    headers: { 'content-type': 'application/json' },
    payload: JSON.stringify(choice),
  })
  expect(chosen.json()).toMatchObject({ ...choice, version: 1, moved: [] })
})
afterAll(() => service.close())

describe('a reading', () => {
  let first: ReturnType<typeof worn>
  let benchWh: number

  test('moves the closing balance by what it shows lost over the hours of sun, worked by hand', async () => {
    benchWh = await closingWh()
    first = worn()
    const answer = await read(first)
    expect(answer.statusCode).toBe(201)
    expect(answer.json()).toMatchObject({ id: first.id, verdict: 'counts', counts: true, efficiencyPct: 45 })
    // Believed 10 W, sd 10 W; shown 22 W. Scatter of a reading: n with 2.5 n = 2·(0.002·600 W)² + ½·12² n/(100 + n),
    // so n = 1.6 W². Learned: 10 + 12·100/(100 + 1.6) = 21.8 W. Over two hours of sun: −2·11.8 = −23.6 Wh.
    const [move] = answer.json().moved
    expect(Math.abs(move.movedWh + 23.6)).toBeLessThan(0.2)
    expect(move).toMatchObject({ date: DAY, closingWhBefore: benchWh })
    expect(move.closingWhAfter - benchWh).toBeCloseTo(move.movedWh, 9)
    expect(move.pointsPct['nose tracker']).toBeCloseTo(0, 9)
    expect(await closingWh()).toBe(move.closingWhAfter)
    expect(await get(`${RACE}/days/${DAY}/budget`)).toMatchObject({ learned: true })
  })

  test('sent again is harmless: nothing is kept and nothing moves', async () => {
    const before = await closingWh()
    const again = await read(first)
    expect(again.statusCode).toBe(200)
    expect(again.json()).toMatchObject({ id: first.id, verdict: 'counts', moved: [] })
    expect((await get(`${RACE}/readings`)).items).toHaveLength(1)
    expect(await closingWh()).toBe(before)
  })

  test('under the id of another one is refused, and the field named', async () => {
    const problem = (await read({ ...first, outputA: 0.19 })).json()
    expect(problem).toMatchObject({ status: 409, code: 'reading-taken', errors: [{ field: 'outputA' }] })
    const batch = (await read({ readings: [worn(), { ...first, note: 'by the gate' }] })).json()
    expect(batch).toMatchObject({ status: 409, errors: [{ field: 'readings[1].note' }] })
    expect((await get(`${RACE}/readings`)).items).toHaveLength(1)
  })

  test('set aside moves the balance back, taken back moves it again', async () => {
    const learnedWh = await closingWh()
    const aside = (await post(`${RACE}/readings/${first.id}/set-aside`)).json()
    expect(aside).toMatchObject({ id: first.id, isSetAside: true, moved: [{ closingWhAfter: benchWh }] })
    expect(await closingWh()).toBe(benchWh)
    expect((await get(`${RACE}/readings`)).items[0]).toMatchObject({ isSetAside: true, reading: first })
    const back = (await post(`${RACE}/readings/${first.id}/take-back`)).json()
    expect(back).toMatchObject({ isSetAside: false, moved: [{ closingWhAfter: learnedWh }] })
    expect((await post(`${RACE}/readings/${newId()}/set-aside`)).json()).toMatchObject({ code: 'no-such-reading' })
  })

  test('no longer counts where a planner goes back to the bench, until he takes up what was learned', async () => {
    const learnedWh = await closingWh()
    const bench = (await post(`${RACE}/belief`, { use: 'bench' })).json()
    expect(bench).toMatchObject({ uses: 'bench', widen: 1, moved: [{ closingWhAfter: benchWh }] })
    expect(await get(`${RACE}/days/${DAY}/budget`)).toMatchObject({ learned: false })
    const learned = (await post(`${RACE}/belief`, { use: 'learned' })).json()
    expect(learned).toMatchObject({ uses: 'learned', moved: [{ closingWhAfter: learnedWh }] })
    const { items } = await get(`${RACE}/history?date=${DAY}`)
    expect(items.map((item: { cause: string }) => item.cause)).toEqual([
      'use-learned',
      'use-bench',
      'take-back',
      'set-aside',
      'reading',
      'choice',
    ])
    expect(items[4]).toMatchObject({ readingId: first.id, closingWhBefore: benchWh, closingWhAfter: learnedWh })
    expect(items[5]).toMatchObject({ closingWhBefore: null, closingWhAfter: benchWh })
  })

  test('with a bench that is trusted less moves more', async () => {
    const { moved } = (await post(`${RACE}/belief`, { use: 'learned', widen: 3 })).json()
    expect(moved[0].movedWh).toBeLessThan(-0.1)
    expect((await post(`${RACE}/belief`, { use: 'learned', widen: 0.5 })).json()).toMatchObject({
      status: 422,
      errors: [{ field: 'widen' }],
    })
    await post(`${RACE}/belief`, { use: 'learned', widen: 1 })
  })

  test('that shows more out than in by far is kept and moves nothing', async () => {
    const more = (await read(worn({ outputA: 0.5 }))).json()
    expect(more).toMatchObject({ verdict: 'impossible', counts: false, efficiencyPct: 125, moved: [] })
    expect(more.reason).toContain('125.0 %')
  })

  test.each([
    ['a tracker that the car does not have', { tracker: 'tail' }, 'tracker'],
    ['a meter that the car does not have', { meters: { inputA: 'clamp C' } }, 'meters.inputA'],
    ['volts from a meter of amps', { meters: { inputV: 'clamp A' } }, 'meters.inputV'],
    ['no current', { inputA: 0 }, 'inputA'],
    ['an id that is none', { id: 'first' }, 'id'],
    ['a time without its zone', { at: '2026-10-17T09:30:00' }, 'at'],
  ])('with %s is refused, and the field named', async (_, wrong, field) => {
    const problem = (await read({ ...worn(), ...wrong })).json()
    expect(problem).toMatchObject({ status: 422, code: 'invalid-document' })
    expect(problem.errors[0].field).toBe(field)
  })

  test('comes with others in one go', async () => {
    const readings = [worn(), worn({ tracker: 'nose tracker' })]
    const answer = await read({ readings })
    expect(answer.statusCode).toBe(201)
    expect(answer.json().items.map((item: { id: string }) => item.id)).toEqual(readings.map(({ id }) => id))
    expect(answer.json().moved).toHaveLength(1)
    expect(answer.json().moved[0].pointsPct['nose tracker']).toBeLessThan(-0.5)
  })

  test('counts in a try of the stored car and race as in the budget that is followed', async () => {
    const speeds = { kind: 'constant', speedKmh: 60 }
    const [car, race, sky] = ['weaver-1', 'plateau', 'clear'].map((id) => ({ id }))
    const tried = (await post('/api/v1/forecast', { car, race, sky, speeds, date: DAY })).json()
    expect(tried.days[0].closing.wh).toBe(await closingWh())
    expect(tried.assumptions.join()).toContain('deck tracker')
  })
})

describe('the trackers', () => {
  test('show the followed day driven again: its parts, where they worked, what they would cost dead', async () => {
    const { items, work } = await get(`${RACE}/trackers?date=${DAY}`)
    expect(work).toMatchObject({ date: DAY, price: { whPerMin: null, how: 'The car is not driven on this day.' } })
    for (const [i, own] of work.trackers.entries()) {
      const [whole, noon] = own.parts
      expect([whole.kind, noon.kind]).toEqual(['day', 'evening-charge'])
      expect(whole.inputWh).toBeCloseTo(items[i].day.wh, 6)
      expect(noon.inputWh).toBeCloseTo(whole.inputWh, 9)
      expect(own.ifDead).toMatchObject({ min: null })
      // Without the tracker its output is missing, out of a pack that loses nothing.
      expect(own.ifDead.wh / (whole.inputWh - whole.lossWh)).toBeCloseTo(1, 2)
      expect(own.path.atMs.length).toBeGreaterThan(100)
      expect(own.path.atMs.length).toBeLessThanOrEqual(200)
    }
  })

  test('show their curve before and after, their readings and where the day’s energy fell', async () => {
    const { uses, items } = await get(`${RACE}/trackers?date=${DAY}`)
    expect(uses).toBe('learned')
    const [deck] = items
    expect(deck).toMatchObject({ name: 'deck tracker', maxW: 600, inputV: 50, outputV: 100 })
    const at = deck.inputW.indexOf(60)
    expect(deck.bench.efficiencyPct[at]).toBeCloseTo(100 * (1 - 10 / 60), 6)
    expect(Math.abs(deck.learned.efficiencyPct[at] - 100 * (1 - 22 / 60))).toBeLessThan(0.5)
    for (const curve of [deck.bench, deck.learned]) expect(curve.lowPct[at]).toBeLessThan(curve.efficiencyPct[at])
    const standing = deck.terms.find(({ name }: { name: string }) => name === 'Standing')
    expect(standing).toMatchObject({ benchValue: 10, isIdentified: true, unit: 'W' })
    expect(standing.sd).toBeLessThan(standing.benchSd)
    expect(deck.readings.map((kept: { verdict: string }) => kept.verdict)).toEqual(['counts', 'impossible', 'counts'])
    const fellWh = deck.day.fell.reduce((sum: number, { wh }: { wh: number }) => sum + wh, 0)
    expect(fellWh).toBeCloseTo(deck.day.wh, 6)
    expect(deck.day.onePointWh).toBeCloseTo(deck.day.wh / 100, 9)
    expect(deck.day.sharePct + items[1].day.sharePct).toBeCloseTo(100, 9)
  })

  test('are shown without the day driven again where nobody asks for that', async () => {
    const { items, work } = await get(`${RACE}/trackers?date=${DAY}&work=no`)
    expect(items).toHaveLength(2)
    expect(work).toBeNull()
  })

  test('of a race that follows nothing are shown for a car by name', async () => {
    await service.ask(saving('race', 'other', noonRace()))
    expect(await get('/api/v1/races/other/trackers')).toMatchObject({ code: 'nothing-followed' })
    const { items } = await get('/api/v1/races/other/trackers?car=weaver-1')
    expect(items[0]).toMatchObject({ day: null, readings: [], benchTold: null })
    expect(items[0].learned).toEqual(items[0].bench)
  })
})
