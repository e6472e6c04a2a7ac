import { describe, expect, test } from 'vitest'
import type { CarInput } from '../../server/documents/car.ts'
import { oneDay } from '../support/some-budget.ts'
import { someCar } from '../support/scenario.ts'

type TrackerInput = CarInput['trackers'][number]

/** A day with every tracker changed. */
const dayWith = (change: Partial<TrackerInput>, of: (tracker: TrackerInput, i: number) => boolean = () => true) =>
  oneDay((r) => {
    r.car.trackers.forEach((tracker, i) => {
      if (of(tracker, i)) Object.assign(tracker, change)
    })
  })
const lineWh = (day: ReturnType<typeof oneDay>, id: string): number =>
  [...day.ledger.spendings, ...day.ledger.denied].find((line) => line.id === id)?.wh ?? Number.NaN
const closes = ({ ledger }: ReturnType<typeof oneDay>): number =>
  ledger.openingWh + ledger.cameInWh + ledger.shortWh - ledger.wentOutWh - ledger.closingWh

describe('a tracker’s standby', () => {
  const without = oneDay(() => undefined)
  const day = dayWith({ standbyW: 3 })

  test('is drawn while it takes nothing and stands among the trackers’ losses', () => {
    // The day opens at 06:00, before the sun, and closes at 19:00; some of it is dark or without charging.
    for (const { standbyWh } of day.trackers) {
      expect(standbyWh).toBeGreaterThan(0.7)
      expect(standbyWh).toBeLessThan(3 * 13)
    }
    const standbyWh = day.trackers.reduce((sum, tracker) => sum + tracker.standbyWh, 0)
    const lossWh = day.trackers.reduce((sum, tracker) => sum + tracker.lossWh, 0)
    expect(lineWh(day, 'trackers')).toBeCloseTo(standbyWh + lossWh, 9)
    expect(Math.abs(closes(day))).toBeLessThan(1e-6)
    expect(without.trackers.every((tracker) => tracker.standbyWh === 0)).toBe(true)
  })

  test('of twenty minutes in the dark is its power times that time', () => {
    const dark = oneDay((r) => {
      r.car.trackers.forEach((tracker) => Object.assign(tracker, { standbyW: 3 }))
      const [one] = r.race.days
      Object.assign(one, { release: '05:00', impound: '05:20', charging: [] })
      one.driving = { from: '05:05', to: '05:10' }
    })
    for (const { standbyWh } of dark.trackers) expect(standbyWh).toBeCloseTo(1, 9)
    expect(lineWh(dark, 'trackers')).toBeCloseTo(2, 9)
  })
})

test('a tracker at work draws no standby: none in an hour of noon', () => {
  const noon = oneDay((r) => {
    r.car.trackers.forEach((tracker) => Object.assign(tracker, { standbyW: 3 }))
    const [one] = r.race.days
    Object.assign(one, { release: '11:00', impound: '12:00', charging: [], driving: { from: '11:00', to: '12:00' } })
  })
  for (const { standbyWh, inputWh } of noon.trackers) {
    expect(standbyWh).toBe(0)
    expect(inputWh).toBeGreaterThan(100)
  }
})

describe('trackers beside one another', () => {
  const shared = oneDay((r) => {
    const [first] = r.car.trackers
    r.car.strings[0].alsoTrackers = ['second deck tracker']
    r.car.trackers.push({ ...first, name: 'second deck tracker' })
  })
  const alone = oneDay(() => undefined)

  test('share the string evenly, each with its own standing loss', () => {
    const [a, b, nose] = shared.trackers
    expect([a.string, b.string, nose.string]).toEqual(['deck string', 'deck string', 'nose string'])
    expect(a.inputWh).toBeCloseTo(b.inputWh, 9)
    expect(a.inputWh + b.inputWh).toBeCloseTo(alone.trackers[0].inputWh, -1)
    expect(Math.abs(closes(shared))).toBeLessThan(1e-6)
  })

  test('a dead one leaves the string to the other, which then loses as it would alone', () => {
    const lame = oneDay((r) => {
      const [first] = r.car.trackers
      r.car.strings[0].alsoTrackers = ['second deck tracker']
      r.car.trackers.push({ ...first, name: 'second deck tracker', isDead: true })
    })
    const [a, b] = lame.trackers
    expect(a.lossWh).toBeCloseTo(alone.trackers[0].lossWh, 6)
    expect(b).toMatchObject({ inputWh: 0, lossWh: 0, deniedWh: 0 })
    expect(lame.closing.wh).toBeCloseTo(alone.closing.wh, 6)
  })

  test('a dead one alone takes its string with it', () => {
    const dead = dayWith({ isDead: true }, (_, i) => i === 0)
    const [deck] = dead.trackers
    expect(deck.inputWh).toBe(0)
    expect(deck.limits.map(({ limit }) => limit)).toEqual(['dead'])
    expect(deck.deniedWh).toBeGreaterThan(0.98 * alone.trackers[0].inputWh)
    expect(lineWh(dead, 'window')).toBeCloseTo(deck.deniedWh, 6)
  })
})

describe('heat and the bench’s own points', () => {
  test('a hot case holds a tracker back under that name', () => {
    const hot = dayWith({ derating: { fullToC: 20, leastFromC: 45, leastPct: 20 } })
    const limits = hot.trackers.flatMap((tracker) => tracker.limits.filter(({ limit }) => limit === 'derated'))
    expect(limits.length).toBe(2)
    expect(limits.reduce((sum, { deniedWh }) => sum + deniedWh, 0)).toBeCloseTo(lineWh(hot, 'window'), 6)
    expect(Math.abs(closes(hot))).toBeLessThan(1e-6)
  })

  test('a table of points that four terms made loses as the four terms do', () => {
    const bench = [20, 60, 150, 250, 400].flatMap((inputW) =>
      [60, 75].flatMap((inputV) =>
        [100, 115].map((outputV) => {
          const lossW = 1 + 0.08 * (inputW / inputV) ** 2
          return { inputV, outputV, inputW, efficiencyPct: 100 * (1 - lossW / inputW) }
        }),
      ),
    )
    const fit = dayWith({ losses: undefined, bench })
    const table = dayWith({ losses: undefined, bench, benchUse: 'table' })
    expect(table.closing.wh).toBeCloseTo(fit.closing.wh, 6)
    // A bench with a bump of 4 W at 150 W is felt by the table alone.
    const bumped = bench.map((p) => (p.inputW === 150 ? { ...p, efficiencyPct: p.efficiencyPct - 400 / 150 } : p))
    const byTable = dayWith({ losses: undefined, bench: bumped, benchUse: 'table' })
    const byFit = dayWith({ losses: undefined, bench: bumped })
    expect(lineWh(byTable, 'trackers')).not.toBeCloseTo(lineWh(byFit, 'trackers'), 0)
  })
})

test('a short car knows none of this', () => {
  const [tracker] = someCar().trackers
  expect(Object.keys(tracker).sort()).toEqual(['losses', 'name', 'window'])
})
