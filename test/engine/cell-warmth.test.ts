import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  CAR_COOLING,
  cellTemperatureC,
  type Cooling,
  heatLoss,
  heatLossWm2K,
  plateHeatWm2K,
} from '../../server/engine/cell-temperature.ts'
import { cellWarmth, warmthAlong } from '../../server/engine/cell-warmth.ts'

interface Part {
  durationS: number
  airC: number
  planeWm2: number
  airSpeedMps: number
}

/** Mean temperature of each part, and the temperature at the end of the last. */
function warmed(cooling: Cooling, parts: Part[]): { meanC: Float64Array; endC: number } {
  const column = (name: keyof Part): Float64Array => Float64Array.from(parts, (part) => part[name])
  const meanC = new Float64Array(parts.length)
  const along = warmthAlong(heatLoss(cooling), column('airSpeedMps'), column('durationS'))
  return { meanC, endC: cellWarmth(along, column('airC'), column('planeWm2'), meanC) }
}

const settledC = (cooling: Cooling, part: Part): number =>
  cellTemperatureC(cooling, part.airC, part.planeWm2, part.airSpeedMps)

/** Runge–Kutta over a part in a thousand steps, for temperature and its sum: knows nothing of exponentials. */
function integrated(cooling: Cooling, part: Part, fromC: number): { meanC: number; endC: number } {
  const loss = heatLoss(cooling)
  const U = heatLossWm2K(loss, part.airSpeedMps)
  const rate = (T: number): number => (loss.heatFraction * part.planeWm2 - U * (T - part.airC)) / loss.capacityJm2K
  const n = 1000
  const h = part.durationS / n
  let [T, sum] = [fromC, 0]
  for (let i = 0; i < n; i++) {
    const a = rate(T)
    const b = rate(T + (h / 2) * a)
    const c = rate(T + (h / 2) * b)
    const d = rate(T + h * c)
    sum += T + (h / 6) * (a + b + c)
    T += (h / 6) * (a + 2 * b + 2 * c + d)
  }
  return { meanC: sum / n, endC: T }
}

const double = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + (n / 1_000_000) * (max - min))
const anyPart = fc.record({
  durationS: double(0.01, 600),
  airC: double(-20, 45),
  planeWm2: double(0, 1300),
  airSpeedMps: double(0, 35),
})
const anyCooling: fc.Arbitrary<Cooling> = fc.oneof(
  fc
    .record({ capacityJm2K: double(500, 20_000), heatFraction: double(0.4, 0.9), startsLaminar: fc.boolean() })
    .map((more): Cooling => ({ ...CAR_COOLING, ...more })),
  double(500, 20_000).map((capacityJm2K): Cooling => ({ kind: 'faiman', u0: 25, u1: 6.84, capacityJm2K })),
)
const anyDay = fc.tuple(anyCooling, fc.array(anyPart, { minLength: 2, maxLength: 8 }))

describe('cells in time', () => {
  // Source: by hand, τ = C/U: 3 kJ/m²K over 61.4 W/m²K at 20 m/s is 49 s, over 17.6 W/m²K parked 170 s.
  it('come 63 % of the way in about 50 s moving and 170 s parked', () => {
    const reached = (cooling: Cooling, airSpeedMps: number, durationS: number): number => {
      const dark = { durationS: 1, airC: 25, planeWm2: 0, airSpeedMps }
      const lit = { ...dark, durationS, planeWm2: 1000 }
      return (warmed(cooling, [dark, lit]).endC - 25) / (settledC(cooling, lit) - 25)
    }
    const share = 1 - Math.exp(-1)
    expect(reached(CAR_COOLING, 20, 48.9)).toBeCloseTo(share, 2)
    expect(reached({ ...CAR_COOLING, stillWm2K: 17.6 }, 0, 170.45)).toBeCloseTo(share, 4)
    expect(-170 / Math.log(1 - reached(CAR_COOLING, 0, 170))).toBeCloseTo(176.5, 1)
  })

  // Source: Hayakawa et al. 2022, Energies 15:4818 (abstract): a car's roof in the sun, up to 16.5 °C in a minute.
  it('warm from cold in full sun by some 13 °C in the first minute, less than the most ever measured on a car', () => {
    const dark = { durationS: 1, airC: 20, planeWm2: 0, airSpeedMps: 0 }
    const firstMinuteC = warmed(CAR_COOLING, [dark, { ...dark, durationS: 1, planeWm2: 1000 }]).endC - 20
    // By hand: 0.67 · 1000 W/m² · 60 s / 3000 J/m²K = 13.4 K, were nothing lost on the way.
    expect(firstMinuteC * 60).toBeGreaterThan(13.3)
    expect(firstMinuteC * 60).toBeLessThan(13.4)
  })

  it('follow a fine numeric integration, step after step', () => {
    let [counted, worst] = [0, 0]
    fc.assert(
      fc.property(anyDay, ([cooling, parts]) => {
        const { meanC, endC } = warmed(cooling, parts)
        let nowC = settledC(cooling, parts[0])
        parts.forEach((part, i) => {
          const by = integrated(cooling, part, nowC)
          worst = Math.max(worst, Math.abs(meanC[i] - by.meanC))
          nowC = by.endC
          counted++
        })
        worst = Math.max(worst, Math.abs(endC - nowC))
      }),
      { numRuns: 200, seed: 3 },
    )
    expect(counted).toBeGreaterThan(600)
    expect(worst).toBeLessThan(2e-11)
  })

  it('take in exactly what they store and lose', () => {
    fc.assert(
      fc.property(anyDay, ([cooling, parts]) => {
        const loss = heatLoss(cooling)
        const { meanC, endC } = warmed(cooling, parts)
        const gains = parts.map((p) => loss.heatFraction * p.planeWm2 * p.durationS)
        const losses = parts.map((p, i) => heatLossWm2K(loss, p.airSpeedMps) * (meanC[i] - p.airC) * p.durationS)
        const sum = (values: number[]): number => values.reduce((total, value) => total + value, 0)
        const storedJm2 = loss.capacityJm2K * (endC - settledC(cooling, parts[0]))
        const movedJm2 = sum(gains) + sum(losses.map(Math.abs)) + Math.abs(storedJm2)
        expect(Math.abs(sum(gains) - sum(losses) - storedJm2)).toBeLessThan(1e-9 * movedJm2 + 1e-6)
      }),
      { seed: 4 },
    )
  })

  it('are the same when a step is cut in two', () => {
    fc.assert(
      fc.property(anyDay, double(0.01, 0.99), fc.nat(), ([cooling, parts], share, pick) => {
        const at = pick % parts.length
        const whole = warmed(cooling, parts)
        const one = { ...parts[at], durationS: parts[at].durationS * share }
        const other = { ...parts[at], durationS: parts[at].durationS * (1 - share) }
        const cut = warmed(cooling, [...parts.slice(0, at), one, other, ...parts.slice(at + 1)])
        expect(cut.endC).toBeCloseTo(whole.endC, 9)
        expect(cut.meanC[at] * share + cut.meanC[at + 1] * (1 - share)).toBeCloseTo(whole.meanC[at], 9)
      }),
      { seed: 5 },
    )
  })

  it('stay between where they start and where they would settle', () => {
    let between = 0
    fc.assert(
      fc.property(anyDay, ([cooling, parts]) => {
        let fromC = settledC(cooling, parts[0])
        parts.forEach((part, i) => {
          const { meanC, endC } = warmed(cooling, parts.slice(0, i + 1))
          const to = settledC(cooling, part)
          for (const T of [meanC[i], endC]) {
            expect(T).toBeGreaterThanOrEqual(Math.min(fromC, to) - 1e-9)
            expect(T).toBeLessThanOrEqual(Math.max(fromC, to) + 1e-9)
          }
          // The mean lies nearer to the start than the end does.
          expect(Math.abs(meanC[i] - fromC)).toBeLessThanOrEqual(Math.abs(endC - fromC) + 1e-9)
          if (Math.abs(to - fromC) > 1) between++
          fromC = endC
        })
      }),
      { seed: 6 },
    )
    expect(between).toBeGreaterThan(100)
  })

  it('tend to the steady temperature in a long step, with little to warm, and exactly without', () => {
    fc.assert(
      fc.property(anyCooling, anyPart, anyPart, (cooling, before, part) => {
        const long = { ...part, durationS: 1e7 }
        expect(warmed(cooling, [before, long]).meanC[1]).toBeCloseTo(settledC(cooling, part), 1)
        expect(warmed(cooling, [before, long]).endC).toBeCloseTo(settledC(cooling, part), 9)
        const minute = { ...part, durationS: 60 }
        const light = warmed({ ...cooling, capacityJm2K: 1e-3 }, [before, minute])
        expect(light.meanC[1]).toBeCloseTo(settledC(cooling, part), 3)
        const none = warmed({ ...cooling, capacityJm2K: 0 }, [before, minute])
        expect(none.meanC[1]).toBeCloseTo(settledC(cooling, part), 12)
        const early = warmed(cooling, [before, { ...part, durationS: 0 }])
        expect(early.meanC[1]).toBeCloseTo(settledC(cooling, before), 9)
      }),
      { seed: 7 },
    )
  })

  it('start as warm as the air in the dark, and settled in the light', () => {
    const dawn = { durationS: 60, airC: 11, planeWm2: 0, airSpeedMps: 0 }
    expect([...warmed(CAR_COOLING, [dawn, dawn]).meanC]).toEqual([11, 11])
    const noon = { ...dawn, planeWm2: 900 }
    expect(warmed(CAR_COOLING, [noon]).meanC[0]).toBeCloseTo(settledC(CAR_COOLING, noon), 12)
  })
})

describe('heat lost to the air', () => {
  // Source: computed by hand from Nu = (.037 Re^.8 − 871) Pr^(1/3), 2 m, ν 1.62e-5, k .026, Pr .71.
  it('is less where the flow starts laminar', () => {
    expect([15, 20, 25, 30].map((speed) => Math.round(plateHeatWm2K(speed, 2, true)))).toEqual([34, 46, 57, 67])
  })

  // Source: by hand; 0.664·Re^.5 and .037·Re^.8 − 871 are 469.5 and 469.6 at Re = 5e5.
  it('does not jump where laminar flow turns turbulent', () => {
    const turnMps = (5e5 * 1.62e-5) / 2
    const below = plateHeatWm2K(turnMps * 0.999999, 2, true)
    expect(plateHeatWm2K(turnMps * 1.000001, 2, true) / below).toBeCloseTo(1, 2)
    expect(below).toBeCloseTo((469.5 * 0.71 ** (1 / 3) * 0.026) / 2, 2)
    for (let v = 0; v < 35; v += 0.1) expect(plateHeatWm2K(v + 0.1, 2, true)).toBeGreaterThan(plateHeatWm2K(v, 2, true))
  })

  // Source: published tests of pvlib-python (snapshot 6382338): U 29 and 0, absorptance .9, efficiency .1, 900 W/m², 20 °C.
  it('meets the published form with absorptance and efficiency', () => {
    const rack: Cooling = { ...CAR_COOLING, heatFraction: 0.9 * (1 - 0.1), stillWm2K: 29 }
    // Printed 45.137, cut off after its last digit: by hand 20 + 0.81 · 900/29 = 45.1379.
    expect(Math.floor(cellTemperatureC(rack, 20, 900, 5) * 1000)).toBe(45_137)
  })

  // Source: by hand: 25 + 6.84·10 = 93.4 W/m²K; carried on it would be 196 at 25 m/s.
  it('by an open rack’s formula grows no more beyond 10 m/s', () => {
    const loss = heatLoss({ kind: 'faiman', u0: 25, u1: 6.84 })
    expect(heatLossWm2K(loss, 9)).toBeCloseTo(25 + 6.84 * 9, 12)
    for (const speed of [10, 25, 40]) expect(heatLossWm2K(loss, speed)).toBeCloseTo(93.4, 12)
  })
})
