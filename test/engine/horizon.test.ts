import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { type Horizon, horizon, sunOverEdge } from '../../server/engine/horizon.ts'
import { ringPlace, ringValue } from '../../server/engine/ring.ts'
import { EXTRA_WM2, flatPanel, lightOn } from './one-instant.ts'

const RAD = Math.PI / 180
type Row = [azimuthDeg: number, heightDeg: number]
const horizonOf = (rows: Row[]): Horizon =>
  horizon(
    'horizon',
    rows.map(([azimuth, height]) => ({ azimuthRad: azimuth * RAD, heightRad: height * RAD })),
  )
const heightDeg = ({ heights }: Horizon, azimuthDeg: number): number =>
  ringValue(heights.columns[0], ringPlace(heights, azimuthDeg * RAD)) / RAD

/** Straight lines between rows, by looking for the two that hold the azimuth; knows nothing of the engine's table. */
function plainHeight(rows: Row[], azimuthDeg: number): number {
  for (let i = 0; i < rows.length; i++) {
    const [from, fromHeight] = rows[i]
    const [next, toHeight] = rows[(i + 1) % rows.length]
    const to = i + 1 < rows.length ? next : next + 360
    for (const at of [azimuthDeg, azimuthDeg + 360])
      if (at >= from && at <= to) return fromHeight + ((at - from) / (to - from)) * (toHeight - fromHeight)
  }
  return Number.NaN
}

const whole = (min: number, max: number) => fc.integer({ min: min * 1000, max: max * 1000 }).map((n) => n / 1000)
const anyRows: fc.Arbitrary<Row[]> = fc
  .uniqueArray(fc.integer({ min: 0, max: 359 }), { minLength: 1, maxLength: 12 })
  .chain((azimuths) =>
    fc
      .array(whole(0, 80), { minLength: azimuths.length, maxLength: azimuths.length })
      .map((heights) => azimuths.sort((a, b) => a - b).map((azimuth, i): Row => [azimuth, heights[i]])),
  )
const anyInstant = fc.record({
  elevationDeg: whole(-3, 90),
  azimuthDeg: whole(0, 360),
  dni: whole(0, 950),
  dhi: whole(0, 500),
  headingDeg: whole(0, 360),
  gradeDeg: whole(-5, 5),
  lifted: fc.boolean(),
})
const anyPanel = fc
  .tuple(whole(-40, 40), whole(-40, 40), fc.constantFrom('none' as const, 'martin-ruiz' as const, 'physical' as const))
  .map(([pitch, roll, incidence]) => flatPanel({ pitchRad: pitch * RAD, rollRad: roll * RAD, incidence }))
const anyModel = fc.constantFrom('hay-davies' as const, 'perez' as const)

describe('a horizon', () => {
  // Source: closed form, the light of an even sky from above a height h on the level is cos²h.
  it('of one height all around leaves cos² of it of the sky', () => {
    for (const h of [0, 1, 10, 30, 45, 60, 89, 90]) {
      expect(horizonOf([[120, h]]).skyView).toBeCloseTo(Math.cos(h * RAD) ** 2, 14)
      expect(
        horizonOf([
          [0, h],
          [90, h],
          [200, h],
        ]).skyView,
      ).toBeCloseTo(Math.cos(h * RAD) ** 2, 14)
    }
    expect(horizonOf([[0, 0]]).skyView).toBe(1)
  })

  // Source: by hand; cos² of a straight slope from a to b has the mean ½ + (sin 2b − sin 2a)/(4(b − a)).
  it('that rises evenly from 0 to 60° and falls again leaves 0.7067 of the sky', () => {
    const mean = 0.5 + Math.sin(120 * RAD) / (4 * 60 * RAD)
    expect(mean).toBeCloseTo(0.7067, 4)
    const slopes = horizonOf([
      [90, 0],
      [270, 60],
    ])
    expect(slopes.skyView).toBeCloseTo(mean, 7)
  })

  it('runs in straight lines between its rows and round the north', () => {
    const two = horizonOf([
      [10, 20],
      [350, 10],
    ])
    expect([0, 360, 720, -360].map((azimuth) => heightDeg(two, azimuth))).toEqual([
      expect.closeTo(15, 9),
      expect.closeTo(15, 9),
      expect.closeTo(15, 9),
      expect.closeTo(15, 9),
    ])
    expect(heightDeg(two, 180)).toBeCloseTo(15, 9)
    expect(heightDeg(two, 95)).toBeCloseTo(17.5, 9)
    fc.assert(
      fc.property(anyRows, whole(0, 360), (rows, azimuth) => {
        expect(heightDeg(horizonOf(rows), azimuth)).toBeCloseTo(plainHeight(rows, azimuth), 6)
      }),
      { seed: 1 },
    )
  })

  it('leaves of the sky what adding it up direction by direction leaves', () => {
    fc.assert(
      fc.property(anyRows, (rows) => {
        let sum = 0
        for (let n = 0; n < 7200; n++) sum += Math.cos(plainHeight(rows, (n + 0.5) / 20) * RAD) ** 2
        expect(horizonOf(rows).skyView).toBeCloseTo(sum / 7200, 5)
      }),
      { seed: 2, numRuns: 50 },
    )
  })

  it('is refused with the row, its value and what was expected', () => {
    expect(() => horizonOf([])).toThrow(/^horizon: is empty/)
    expect(() =>
      horizonOf([
        [90, 5],
        [90, 6],
      ]),
    ).toThrow(/^horizon\[1\]: is at 1.57.* rad, expected rows that ascend/)
    expect(() =>
      horizonOf([
        [0, 5],
        [360, 6],
      ]),
    ).toThrow(/^horizon\[1\]: is at 6.28/)
    expect(() => horizonOf([[0, -1]])).toThrow(/^horizon\[0\].heightRad: is -0.017.* rad, expected 0 to π\/2/)
    expect(() => horizonOf([[0, Number.NaN]])).toThrow(/^horizon\[0\].heightRad: is NaN/)
  })
})

describe('the sun over an edge', () => {
  // Source: tables of the circular segment, height ½ of the radius: 0.19550 of the circle (from memory).
  it('is seen by the part of its disc that stands above', () => {
    const radius = (16 / 60) * RAD
    expect([-2, -1, 0, 1, 2].map((x) => sunOverEdge(x * radius))).toEqual([0, 0, 0.5, 1, 1])
    expect(sunOverEdge(-radius / 2)).toBeCloseTo(0.1955, 4)
    for (let x = -1.2; x <= 1.2; x += 0.01)
      expect(sunOverEdge(x * radius) + sunOverEdge(-x * radius)).toBeCloseTo(1, 12)
  })
})

describe('light behind a horizon', () => {
  const aroundSun = (120 * (800 / EXTRA_WM2)) / Math.sin(30 * RAD)
  const dome = 120 * (1 - 800 / EXTRA_WM2)
  const wall = (height: number) => ({ horizon: horizonOf([[0, height]]) })

  // Source: by hand from Hay and Davies' shares on the level; cos² 20° and cos² 40° of the dome are seen.
  it('keeps beam and light around the sun while the sun stands over it', () => {
    const [plane] = lightOn([flatPanel()], {}, wall(20)).plane
    expect(plane).toBeCloseTo((800 + aroundSun) * 0.5 + dome * Math.cos(20 * RAD) ** 2, 9)
  })

  it('is what is seen of the sky where the sun stands under it', () => {
    const [plane] = lightOn([flatPanel()], {}, wall(40)).plane
    expect(plane).toBeCloseTo(dome * Math.cos(40 * RAD) ** 2, 9)
  })

  it('is half the beam as the sun’s middle passes the edge', () => {
    const [plane] = lightOn([flatPanel()], {}, wall(30)).plane
    expect(plane).toBeCloseTo((800 + aroundSun) * 0.25 + dome * Math.cos(30 * RAD) ** 2, 6)
  })

  // Source: by hand; Perez' brightening of the horizon is a band of 6.5°, which the hills hide whole, half or by a half turn.
  it('loses the bright band over the level horizon as the hills rise into it', () => {
    // Turned away from the sun, an upright panel gets half of the dome, and the band.
    const away = (horizon?: Horizon): number => {
      const at = { azimuthDeg: 180, elevationDeg: 20, dhi: 90 }
      return lightOn([flatPanel({ pitchRad: 90 * RAD })], at, { horizon, skyModel: 'perez' }).plane[0]
    }
    const dome = away(horizonOf([[0, 6.5]])) / Math.cos(6.5 * RAD) ** 2
    const band = away() - dome
    expect(band).toBeGreaterThan(5)
    const bandLeft = (rows: Row[]): number => {
      const under = horizonOf(rows)
      return (away(under) - dome * under.skyView) / band
    }
    expect(bandLeft([[0, 3.25]])).toBeCloseTo(0.5, 9)
    expect(bandLeft([[0, 40]])).toBeCloseTo(0, 9)
    const halfTurn: Row[] = [
      [0, 0],
      [179.9, 0],
      [180, 6.5],
      [359.9, 6.5],
    ]
    expect(bandLeft(halfTurn)).toBeCloseTo(0.5, 3)
  })

  it('counts only where the sun stands: a hill in the west takes no morning beam', () => {
    const hill = horizonOf([
      [180, 0],
      [225, 40],
      [315, 40],
      [350, 0],
    ])
    const [plane] = lightOn([flatPanel()], {}, { horizon: hill }).plane
    expect(plane).toBeCloseTo((800 + aroundSun) * 0.5 + dome * hill.skyView, 9)
    const [evening] = lightOn([flatPanel()], { azimuthDeg: 270 }, { horizon: hill }).plane
    expect(evening).toBeCloseTo(dome * hill.skyView, 9)
  })

  // Source: by hand; the ground around lies in the same shade.
  it('reaches a slanting panel from the ground as much as the ground gets', () => {
    const slanting = flatPanel({ pitchRad: 20 * RAD })
    const seen = Math.cos(40 * RAD) ** 2
    const [plane] = lightOn([slanting], {}, { ...wall(40), albedo: 0.3 }).plane
    const sky = dome * seen * 0.5 * (1 + Math.cos(20 * RAD))
    const ground = dome * seen * 0.3 * 0.5 * (1 - Math.cos(20 * RAD))
    expect(plane).toBeCloseTo(sky + ground, 9)
  })

  it('is never more than under an open sky, and less the higher the horizon', () => {
    let [counted, darker] = [0, 0]
    fc.assert(
      fc.property(anyRows, anyInstant, anyPanel, anyModel, whole(0, 1), (rows, instant, panel, skyModel, part) => {
        const open = lightOn([panel], instant, { skyModel, albedo: 0.3 })
        const low = horizonOf(rows.map(([azimuth, height]): Row => [azimuth, height * part]))
        const half = lightOn([panel], instant, { skyModel, albedo: 0.3, horizon: low })
        const full = lightOn([panel], instant, { skyModel, albedo: 0.3, horizon: horizonOf(rows) })
        for (const kind of ['plane', 'effective'] as const) {
          expect(half[kind][0]).toBeLessThanOrEqual(open[kind][0] + 1e-9)
          expect(full[kind][0]).toBeLessThanOrEqual(half[kind][0] + 1e-9)
          expect(full[kind][0]).toBeGreaterThanOrEqual(0)
        }
        counted++
        if (full.plane[0] < open.plane[0] - 100) darker++
      }),
      { numRuns: 500, seed: 3 },
    )
    expect(counted).toBe(500)
    expect(darker).toBeGreaterThan(50)
  })

  it('is the same to the last bit under a level horizon', () => {
    const level = horizonOf([
      [0, 0],
      [100, 0],
    ])
    fc.assert(
      fc.property(anyInstant, anyPanel, anyModel, (instant, panel, skyModel) => {
        const open = lightOn([panel], instant, { skyModel, albedo: 0.3 })
        expect(lightOn([panel], instant, { skyModel, albedo: 0.3, horizon: level })).toEqual(open)
      }),
      { numRuns: 300, seed: 4 },
    )
  })
})
