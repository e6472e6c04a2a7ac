import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { checkVariants } from '../../server/compute/variant-jobs.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { planDocuments } from '../../server/documents/plan-day.ts'
import { planRequest } from '../../server/documents/plan-request.ts'
import type { EnergyCause, VariantAnswer } from '../../server/documents/variant.ts'
import { whatIfRequest } from '../../server/documents/what-if.ts'
import { whatIfDocuments } from '../../server/documents/what-if-model.ts'
import { Fault } from '../../server/errors.ts'
import { demoRequest } from '../support/demo-race.ts'
import { workedBase, workedVariants } from '../support/worked-variants.ts'

const DATE = '2026-10-16'
const request = planRequest.parse(demoRequest({ date: DATE }))
const base = workedBase(request)
const before = base.driven
if (before === null) throw new Error('the demo’s Friday can be planned')
const one = (variant: object): VariantAnswer => workedVariants(request, [{ name: 'One', ...variant }], base)[0]
const sumWh = (causes: EnergyCause[]): number => causes.reduce((sum, { wh }) => sum + wh, 0)
const line = (causes: EnergyCause[] | undefined, id: string): number =>
  causes?.find((cause) => cause.id === id)?.wh ?? NaN
const MINUTE_MS = 60_000

describe('the base of variants', { timeout: 60_000 }, () => {
  test('is the plan of the day', () => {
    const plan = planDocuments(request)
    expect(base.outcome).toEqual({ kind: 'planned', text: plan.outcome.text })
    expect(before.figures).toMatchObject({
      arriveAt: plan.forPeople?.arriveAt,
      bestArriveAt: plan.best?.arriveAt,
      closingWh: plan.forPeople?.closingWh,
      leastSpareWh: plan.forPeople?.leastSpareWh,
      touchesReservePct: plan.ranges?.touchesReservePct,
      missesTargetPct: plan.ranges?.missesTargetPct,
      speeds: plan.forPeople?.speeds,
    })
    expect(sumWh(before.lines)).toBeCloseTo(before.figures.closingWh, 6)
  })
})

describe('a variant', { timeout: 120_000 }, () => {
  test('that changes nothing is the base, bit for bit', () => {
    for (const nothing of [{}, { car: {}, race: {}, sky: {}, change: {} }, { change: { sunPct: 100, massKg: 0 } }]) {
      const { figures, laterMin, energyCauses, arrivalCauses, atBaseSpeeds, assumptions } = one(nothing)
      expect(figures).toEqual(before.figures)
      expect([laterMin, arrivalCauses, assumptions]).toEqual([0, [], []])
      expect(energyCauses?.filter(({ wh }) => wh !== 0)).toEqual([])
      expect(atBaseSpeeds?.causes.filter(({ wh }) => wh !== 0)).toEqual([])
      expect(atBaseSpeeds?.closingWh).toBe(before.figures.closingWh)
    }
  })

  const change = fc.record(
    {
      sunPct: fc.integer({ min: 60, max: 130 }),
      headwindMps: fc.integer({ min: -3, max: 4 }),
      massKg: fc.integer({ min: -20, max: 40 }),
      dragAreaPct: fc.integer({ min: 90, max: 120 }),
      rollingPct: fc.integer({ min: 90, max: 120 }),
      trackerLossPct: fc.integer({ min: 0, max: 200 }),
      openingPct: fc.integer({ min: -4, max: 4 }),
    },
    { requiredKeys: [] },
  )

  test('differs by causes that add up', () => {
    let count = 0
    fc.assert(
      fc.property(change, (some) => {
        const { figures, laterMin, energyCauses, arrivalCauses, atBaseSpeeds } = one({ change: some })
        if (figures === null || energyCauses === null || arrivalCauses === null || atBaseSpeeds === null) return
        count++
        const { closingWh } = before.figures
        expect(Math.abs(sumWh(energyCauses) - (figures.closingWh - closingWh))).toBeLessThan(1e-6)
        expect(Math.abs(sumWh(atBaseSpeeds.causes) - (atBaseSpeeds.closingWh - closingWh))).toBeLessThan(1e-6)
        const later = arrivalCauses.reduce((sum, { min }) => sum + min, 0)
        expect(Math.abs(later - (laterMin ?? NaN))).toBeLessThan(1e-9)
        expect(Math.abs(laterMin ?? NaN) * MINUTE_MS).toBeCloseTo(
          Math.abs(Date.parse(figures.arriveAt) - Date.parse(before.figures.arriveAt)),
          -3.01,
        )
      }),
      { numRuns: 6, seed: 4 },
    )
    expect(count).toBeGreaterThan(3)
  })

  test('with more sun is never later, with more drag never earlier', () => {
    const bestMs = (variant: VariantAnswer): number => Date.parse(variant.figures?.bestArriveAt ?? '')
    const [least, less, more, most] = [80, 90, 110, 125].map((sunPct) => bestMs(one({ change: { sunPct } })))
    // The search itself is right to a second; instants are told to the second.
    const order = [most, more, before.bestMs, less, least]
    for (let i = 1; i < order.length; i++) expect(order[i]).toBeGreaterThan(order[i - 1] - 2000)
    expect(bestMs(one({ change: { dragAreaPct: 115 } }))).toBeGreaterThan(before.bestMs)
  })

  test('loses at the base’s speeds what the change takes, by hand', () => {
    const sun = one({ change: { sunPct: 90 } }).atBaseSpeeds?.causes
    // A tenth of the light is a tenth of the power, less what cooler cells gain: 0.3 %/K of some 3 K (by hand).
    for (const id of ['morning-charge', 'on-the-road']) {
      const share = line(sun, id) / line(before.lines, id)
      expect(share).toBeGreaterThan(-0.101)
      expect(share).toBeLessThan(-0.088)
    }
    expect(line(sun, 'drag')).toBeCloseTo(0, 6)
    const rolling = one({ change: { rollingPct: 110 } }).atBaseSpeeds?.causes
    expect(line(rolling, 'rolling') / line(before.lines, 'rolling')).toBeCloseTo(0.1, 2)
    const trackers = one({ change: { trackerLossPct: 0 } }).atBaseSpeeds?.causes
    expect(line(trackers, 'trackers')).toBeCloseTo(-line(before.lines, 'trackers'), 1)
  })

  test('says the same by a patch of the document as by a number', () => {
    const { massKg } = request.car.body
    const patched = one({ car: { body: { massKg: massKg + 20 } } })
    const numbered = one({ change: { massKg: 20 } })
    expect(patched.figures).toEqual(numbered.figures)
    expect(patched.arrivalCauses?.[0].label).toBe('Car')
    const dead = request.car.trackers.map((tracker, i) => (i === 0 ? { ...tracker, isDead: true } : tracker))
    const [first] = request.car.trackers
    expect(one({ car: { trackers: dead } }).figures).toEqual(one({ change: { trackerOff: first.name } }).figures)
  })

  test('agrees with the quick answer', () => {
    const changes = [
      { sunPct: 85 },
      { headwindMps: 2 },
      { dragAreaPct: 110 },
      { openingPct: -4 },
      { targetPct: 86 },
      { closePct: 2 },
    ]
    const quick = whatIfDocuments(
      whatIfRequest.parse({
        ...demoRequest({ date: DATE }),
        variants: changes.map((by, i) => ({ name: `${i}`, change: by })),
      }),
    ).variants
    changes.forEach((by, i) => {
      const { figures } = one({ change: by })
      const laterS = (Date.parse(figures?.bestArriveAt ?? '') - before.bestMs) / 1000
      const quickS = 60 * (quick[i].laterMin ?? NaN)
      expect(laterS, JSON.stringify(by)).toBeGreaterThan(10)
      expect(Math.abs(quickS - laterS), JSON.stringify(by)).toBeLessThan(10 + 0.12 * laterS)
    })
  })

  test('at speeds of its own is the forecast at these speeds', () => {
    const speeds = { kind: 'constant', speedKmh: 72 }
    const { outcome, figures, arrivalCauses } = one({ speeds })
    const [day] = forecastDocuments(forecastRequest.parse(demoRequest({ date: DATE, speeds }))).days
    expect(outcome).toEqual({ kind: 'forecast', text: day.outcome.text })
    expect(figures?.closingWh).toBeCloseTo(day.closing.wh, 3)
    expect(figures?.leastSpareWh).toBeCloseTo(day.marginWh, 3)
    expect(figures?.overTargetWh).toBeCloseTo(day.targetMarginWh ?? NaN, 3)
    expect(arrivalCauses?.map(({ id }) => id)).toEqual(['speeds'])
  })

  test('that cannot be driven says why, and is compared with nothing', () => {
    const { outcome, figures, laterMin, arrivalCauses, energyCauses, atBaseSpeeds } = one({
      change: { targetPct: 100 },
    })
    expect(outcome.kind).toBe('impossible')
    expect(outcome.text).toContain('100 %')
    expect([figures, laterMin, arrivalCauses, energyCauses]).toEqual([null, null, null, null])
    expect(atBaseSpeeds?.closingWh).toBe(before.figures.closingWh)
  })

  test('opens with the base’s charge, unless the race is another', () => {
    const { parallelCells } = request.car.pack
    const larger = one({ car: { pack: { parallelCells: parallelCells + 1 } } }).atBaseSpeeds?.causes
    // One more row of cells holds as much more at the same charge.
    expect(line(larger, 'opening') / line(before.lines, 'opening')).toBeCloseTo(1 / parallelCells, 2)
    const fuller = one({ race: { openingPct: 60 } }).atBaseSpeeds?.causes
    expect(line(fuller, 'opening') / line(before.lines, 'opening')).toBeCloseTo(60 / 52 - 1, 1)
  })
})

describe('variants are refused', () => {
  const refusal = (variants: unknown): Fault => {
    try {
      checkVariants({ request, variants })
    } catch (error) {
      if (error instanceof Fault) return error
      throw error
    }
    throw new Error('was not refused')
  }

  test('by variant, field, value and what was expected', () => {
    const { code, message, errors } = refusal([
      { name: 'Light' },
      { name: 'Feather', car: { body: { massKg: 1, colour: 'red' } } },
    ])
    expect(code).toBe('invalid-document')
    expect(message).toBe('The variant "Feather" has 2 problems.')
    expect(errors).toContainEqual({ field: 'variants[1].car.body.massKg', value: '1', detail: 'expected at least 20' })
    expect(errors).toContainEqual({
      field: 'variants[1].car.body.colour',
      detail: 'unknown field; expected none of this name',
    })
  })

  test.each([
    ['a name used twice', [{ name: 'A' }, { name: 'A' }], '[1].name', 'expected a name used once'],
    ['none at all', [], 'document', 'expected at least 1 entries'],
    [
      'speeds that are looked for',
      [{ name: 'A', speeds: { kind: 'meet-target' } }],
      '[0].speeds.kind',
      'expected "constant"',
    ],
    ['a number out of its range', [{ name: 'A', change: { sunPct: 0 } }], '[0].change.sunPct', 'expected at least 1'],
  ])('with %s', (_what, variants, field, detail) => {
    const { errors } = refusal(variants)
    expect(errors[0].field).toBe(field)
    expect(errors[0].detail).toContain(detail)
  })

  test('where what they make does not fit together', () => {
    expect(() => one({ change: { trackerOff: 'attic' } })).toThrow(
      'The variant "One", change.trackerOff: "attic" given',
    )
    expect(() => one({ change: { byTime: '20:00' } })).toThrow('The variant "One", change.byTime: 20:00 given')
  })
})
