import { describe, expect, test } from 'vitest'
import { dayRules, raceCourse, stageRules } from '../../server/documents/race-model.ts'
import { raceDocument } from '../../server/documents/race.ts'
import type { RaceInput } from '../../server/documents/race.ts'
import { routeDocument } from '../../server/documents/route.ts'
import { someRace, someRoute } from '../support/scenario.ts'

function race(change: (race: RaceInput) => void = () => undefined) {
  const document = someRace()
  const [day] = document.days
  document.days.push({ ...day, date: '2026-10-18', stages: [] })
  change(document)
  return raceDocument.parse(document)
}

/** 17 October 2026 in Windhoek, UTC+2. [ms] */
const at = (day: number, hour: number, minute = 0) => Date.UTC(2026, 9, 17 + day, hour - 2, minute)

describe('the race in the engine’s units', () => {
  test('a day opens with the release and closes with the impound', () => {
    const [day] = dayRules(race((r) => void (r.days[0].release = '05:30')))
    expect(day).toMatchObject({ opensMs: at(0, 5, 30), closesMs: at(0, 19), lastStage: 0, raiseS: 120, lowerS: 120 })
    expect(day.charging[1]).toEqual({ fromMs: at(0, 15), toMs: at(0, 18, 30), lifts: true })
  })

  test('without them it opens and closes with the first and last thing that may happen', () => {
    const [day] = dayRules(
      race((r) => {
        r.days[0] = { ...r.days[0], release: undefined, impound: undefined, raiseMin: 3, lowerMin: 1 }
        r.days[0].charging = [{ from: '07:15', to: '07:45', lift: false }]
      }),
    )
    expect(day).toMatchObject({ opensMs: at(0, 7, 15), closesMs: at(0, 17), raiseS: 180, lowerS: 60 })
    expect(day.charging[0].lifts).toBe(false)
  })

  test('a stop opens and closes at its hours on every day that the car may come', () => {
    const [{ stop }] = stageRules(
      race((r) => {
        const [stage] = r.days[0].stages ?? []
        stage.stop = { minutes: 30, opensAt: '09:00', closesAt: '13:00', raiseMin: 4, lowerMin: 1 }
      }),
    )
    expect([...(stop?.opensMs ?? [])]).toEqual([at(0, 9), at(1, 9)])
    expect([...(stop?.closesMs ?? [])]).toEqual([at(0, 13), at(1, 13)])
    expect(stop).toMatchObject({ lengthS: 1800, raiseS: 240, lowerS: 60, runsFromOpening: false })
  })

  test('limits, surfaces and halts hold on their stretches, the road’s own limit elsewhere', () => {
    const route = routeDocument.parse({
      ...someRoute(20),
      limitKmh: 90,
      stretches: [{ fromKm: 5, toKm: 7, limitKmh: 36, surfaceFactor: 1.5, haltsPerKm: 2 }],
    })
    const { pieces } = raceCourse(race(), { road: route })
    const inside = pieces.fromM.findIndex((m) => m >= 5000 - 1e-6)
    expect(pieces.limitMps[inside]).toBeCloseTo(10, 12)
    expect(pieces.surfaceFactor[inside]).toBe(1.5)
    expect(pieces.haltsPerM[inside]).toBeCloseTo(0.002, 12)
    expect(pieces.limitMps[0]).toBeCloseTo(25, 12)
    expect(pieces.haltsPerM[0]).toBe(0)
  })

  test('a stage is as long as it says, and ends on its route where it says a little more', () => {
    const route = routeDocument.parse(someRoute(20))
    const part = raceCourse(
      race((r) => Object.assign((r.days[0].stages ?? [])[0], { fromKm: 3.2, toKm: 9.9 })),
      { road: route },
    )
    expect(part.lengthM).toBeCloseTo(6700, 6)
    const whole = raceCourse(race(), { road: route })
    const rounded = raceCourse(
      race((r) => Object.assign((r.days[0].stages ?? [])[0], { toKm: 20.05 })),
      { road: route },
    )
    expect(rounded.lengthM).toBeCloseTo(whole.lengthM, 6)
  })
})
