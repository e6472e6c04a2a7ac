import { describe, expect, test } from 'vitest'
import { carBelief, carEvidence, learnedOf, strangers } from '../../server/documents/belief-model.ts'
import { type CarInput, carDocument } from '../../server/documents/car.ts'
import { trackerModel } from '../../server/documents/tracker-model.ts'
import { judgeReadings } from '../../server/documents/judgement.ts'
import { readingDocument, type ReadingDocument } from '../../server/documents/reading.ts'
import { judgeInOrder } from '../../server/engine/reading-log.ts'
import { someCar } from '../support/scenario.ts'
import { budget, oneDay } from '../support/some-budget.ts'

const METERS: CarInput['meters'] = [
  { name: 'volts', measures: 'V', accuracyPct: 0.5 },
  { name: 'clamp A', measures: 'A', accuracyPct: 1.5 },
  { name: 'clamp B', measures: 'A', accuracyPct: 1.5 },
]
const car = carDocument.parse({ ...someCar(), meters: METERS })

let serial = 0
const reading = (more: object = {}): ReadingDocument =>
  readingDocument.parse({
    id: `00000000-0000-4000-8000-${String(++serial).padStart(12, '0')}`,
    tracker: 'deck tracker',
    at: '2026-10-17T10:00:00+02:00',
    inputV: 60,
    inputA: 5,
    outputV: 110,
    outputA: 2.65,
    ...more,
  })

const PLAIN = { inputV: 'volts', outputV: 'volts', inputA: 'clamp A', outputA: 'clamp B' }
const SWAPPED = { ...PLAIN, inputA: 'clamp B', outputA: 'clamp A' }

describe('a car without readings', () => {
  test('is exactly its bench: nothing is learned', () => {
    expect(learnedOf(car, [])).toEqual({})
    const { trackers } = carBelief(car, [])
    expect(trackers.map(({ losses }) => losses)).toEqual(car.trackers.map((tracker) => trackerModel(tracker).losses))
  })

  test('with bench points starts from the curve through them, as uncertain as they are', () => {
    const bench = [60, 150, 250, 350].map((inputW) => ({ inputV: 60, outputV: 110, inputW, efficiencyPct: 97 }))
    const measured = (spreadPct: number) =>
      carDocument.parse({
        ...someCar(),
        trackers: someCar().trackers.map((tracker) => ({
          ...tracker,
          losses: undefined,
          bench: bench.map((point) => ({ ...point, spreadPct })),
        })),
      })
    const [own] = carBelief(measured(0.5), []).trackers
    expect(own.losses).toEqual(trackerModel(measured(0.5).trackers[0]).losses)
    expect(carBelief(measured(2), []).trackers[0].sd.conductionOhm).toBeGreaterThan(own.sd.conductionOhm)
    expect(carBelief(measured(0), []).trackers[0].sd.conductionOhm).toBeGreaterThan(0)
  })

  test('is less sure of a bench that is trusted less, and as much as its document says', () => {
    const sd = (widen: number, of = car) => carBelief(of, [], widen).trackers[0].sd.standingW
    expect(sd(1) / (0.25 * 1)).toBeCloseTo(1, 3)
    expect(sd(2) / sd(1)).toBeGreaterThan(1.3)
    const [first, ...rest] = car.trackers
    expect(sd(1, { ...car, trackers: [{ ...first, lossesSpreadPct: 10 }, ...rest] }) / 0.1).toBeCloseTo(1, 3)
  })
})

describe('meters', () => {
  const sdsOf = (readings: ReadingDocument[]) =>
    carEvidence(car, readings).meters.map(({ name, gainSd }) => [name, gainSd * 100 * Math.sqrt(3)])

  test('are as good as their class, evenly likely anywhere in it', () => {
    const classes = sdsOf([reading({ meters: PLAIN })])
    expect(classes.map(([name]) => name)).toEqual(['volts', 'clamp A', 'clamp B'])
    for (const [k, pct] of [0.5, 1.5, 1.5].entries()) expect(classes[k][1]).toBeCloseTo(pct, 12)
  })

  test('that nobody named are one of the usual class for each side of each tracker', () => {
    const readings = [reading(), reading(), reading({ tracker: 'nose tracker', meters: { inputV: 'volts' } })]
    const implied = sdsOf(readings).slice(3)
    expect(implied.map(([name]) => name)).toEqual([
      'deck tracker: inputV',
      'deck tracker: inputA',
      'deck tracker: outputV',
      'deck tracker: outputA',
      'nose tracker: inputA',
      'nose tracker: outputV',
      'nose tracker: outputA',
    ])
    for (const [k, pct] of [0.5, 1.5, 0.5, 1.5, 1.5, 0.5, 1.5].entries()) expect(implied[k][1]).toBeCloseTo(pct, 12)
    expect(carEvidence(car, readings).readings[2].meters.inputV).toBe(0)
  })

  test('and trackers that the car does not have are named with those that it has', () => {
    const wrong = reading({ tracker: 'tail tracker', meters: { ...PLAIN, outputV: 'clamp A' } })
    expect(strangers(car, wrong)).toEqual([
      { field: 'tracker', value: '"tail tracker"', detail: 'one of "deck tracker", "nose tracker"' },
      { field: 'meters.outputV', value: '"clamp A"', detail: 'one of "volts"' },
    ])
    expect(strangers(car, reading({ meters: PLAIN }))).toEqual([])
  })
})

describe('readings that come one by one', () => {
  // Far below the band until the clamps are swapped; then one as expected, one of another tracker, one at an edge.
  const readings = [
    reading({ meters: PLAIN, outputA: 2.45 }),
    reading({ meters: SWAPPED, outputA: 2.72 }),
    reading({ meters: PLAIN }),
    reading({ tracker: 'nose tracker', outputA: 2.6 }),
    reading({ inputA: 7.99 }),
  ]

  test('are judged as all in their order are', () => {
    const before: { reading: ReadingDocument; judgement: { verdict: string; counts: boolean } }[] = []
    for (const one of readings) {
      const held = before.map(({ reading: of, judgement }) => ({ reading: of, judgement: judgementOf(judgement) }))
      const { judgements, again } = judgeReadings(car, held, [one])
      for (const { id, judgement } of again) {
        const earlier = before.find((kept) => kept.reading.id === id)
        if (earlier !== undefined) earlier.judgement = judgement
      }
      before.push({ reading: one, judgement: judgements[0] })
    }
    const { judgements } = judgeInOrder(carEvidence(car, readings))
    expect(before.map(({ judgement }) => judgement.verdict)).toEqual(judgements.map(({ verdict }) => verdict))
    expect(judgements.map(({ verdict }) => verdict)).toEqual(['counts', 'counts', 'counts', 'counts', 'at-limit'])
    expect(judgeReadings(car, [], [readings[0]]).judgements[0]).toMatchObject({ verdict: 'far-off', counts: false })
  })

  test('in one go are judged the same', () => {
    const { judgements, again } = judgeReadings(car, [], readings)
    expect(again).toEqual([])
    expect(judgements.map(({ verdict }) => verdict)).toEqual(['counts', 'counts', 'counts', 'counts', 'at-limit'])
    // Geometric mean of 2.45 and 2.72 A: free of both clamps' gains.
    expect(judgements[1].swappedEfficiencyPct).toBeCloseTo((Math.sqrt(2.45 * 2.72) * 110 * 100) / 300, 9)
  })
})

const judgementOf = ({ verdict, counts }: { verdict: string; counts: boolean }) => {
  if (verdict !== 'counts' && verdict !== 'far-off' && verdict !== 'at-limit') throw new Error(verdict)
  return { verdict, counts } as const
}

describe('what was learned', () => {
  test('takes the place of the car’s own losses in a forecast, and the budget says so', () => {
    const worn = { standingW: 3, switchingPct: 0.6, conductionOhm: 0.1, rectifierV: 0.7 }
    const learned = { standingW: 3, switchingFraction: 0.006, conductionOhm: 0.1, rectifierV: 0.7 }
    const believed = budget((r) => {
      r.race.openingPct = 20
      r.learned = { 'deck tracker': learned }
    })
    const built = oneDay((r) => {
      r.race.openingPct = 20
      r.car.trackers[0].losses = worn
    })
    const bench = oneDay((r) => {
      r.race.openingPct = 20
    })
    expect(believed.days[0].closing.wh).toBeCloseTo(built.closing.wh, 9)
    expect(believed.days[0].closing.wh).toBeLessThan(bench.closing.wh - 10)
    expect(believed.assumptions.join()).toContain('deck tracker')
  })
})
