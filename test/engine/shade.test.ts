import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { horizon } from '../../server/engine/horizon.ts'
import { type ShadeRow, shade } from '../../server/engine/shade.ts'
import { EXTRA_WM2, flatPanel, lightOn } from './one-instant.ts'

const RAD = Math.PI / 180
const rowsOf = (rows: [bearingDeg: number, heightDeg: number, lostPct: number][]): ShadeRow[] =>
  rows.map(([bearing, height, lost]) => ({
    bearingRad: bearing * RAD,
    heightRad: height * RAD,
    lostShare: lost / 100,
  }))

/** A fin on the right: half of the beam is lost under 40° from the right, nothing from elsewhere. */
const FIN = rowsOf([
  [60, 40, 0],
  [80, 40, 50],
  [100, 40, 50],
  [120, 40, 0],
])

/** Share of the beam that is left on a flat panel, where the sky gives none. */
function left(shade: ShadeRow[], instant: Parameters<typeof lightOn>[1], stand = {}): number {
  const beam = { ...instant, dhi: 0 }
  const [shaded, open] = lightOn([flatPanel({ shade }), flatPanel()], beam, { stand }).plane
  return shaded / open
}

describe('shade of the car on a panel', () => {
  // Source: by hand; the sun stands 30° high in the east unless a case says otherwise.
  it('cuts the beam by its row where the sun stands beside it, as the heading turns', () => {
    expect(left(FIN, { headingDeg: 0 })).toBeCloseTo(0.5, 12)
    expect(left(FIN, { headingDeg: 20 })).toBeCloseTo(0.75, 9)
    expect(left(FIN, { headingDeg: 90 })).toBe(1)
    expect(left(FIN, { headingDeg: 180 })).toBe(1)
    expect(left(FIN, { headingDeg: 270, azimuthDeg: 0 })).toBeCloseTo(0.5, 12)
    expect(left(FIN, { headingDeg: 0, elevationDeg: 45 })).toBe(1)
    expect(left(FIN, { headingDeg: 0, elevationDeg: 40 })).toBeCloseTo(0.75, 9)
  })

  // Source: by hand; a climb of 15° towards the sun lowers it over the deck by 15°, a climb away from it lifts it so.
  it('counts the sun’s height from the deck, which a grade tips', () => {
    const ahead = rowsOf([[0, 40, 60]])
    expect(left(ahead, { headingDeg: 90, elevationDeg: 50, gradeDeg: 0 })).toBe(1)
    expect(left(ahead, { headingDeg: 90, elevationDeg: 50, gradeDeg: 15 })).toBeCloseTo(0.4, 12)
    expect(left(ahead, { headingDeg: 270, elevationDeg: 30, gradeDeg: 0 })).toBeCloseTo(0.4, 12)
    expect(left(ahead, { headingDeg: 270, elevationDeg: 30, gradeDeg: 15 })).toBe(1)
  })

  // Source: by hand; lifted square to the sun it stands 90° over the deck, tilted by at most 5° it stands at 35°.
  it('goes up with the lifted array, and stays on a panel that does not lift', () => {
    expect(left(FIN, { lifted: true })).toBe(1)
    expect(left(FIN, { lifted: true }, { tiltMaxRad: 5 * RAD })).toBeCloseTo(0.5, 12)
    expect(left(FIN, { lifted: true }, { tiltMaxRad: 15 * RAD })).toBe(1)
    const beam = { dhi: 0, lifted: true }
    const [held] = lightOn([flatPanel({ shade: FIN, lifts: false })], beam).plane
    expect(held).toBeCloseTo(800 * 0.5 * 0.5, 9)
  })

  // Source: by hand from Hay and Davies' shares; light around the sun goes with the beam, cos² 40° of the dome is left.
  it('takes light around the sun as the beam, and of the even sky what its rows hide', () => {
    const tub = rowsOf([[0, 40, 100]])
    const dome = 120 * (1 - 800 / EXTRA_WM2)
    const aroundSun = (120 * (800 / EXTRA_WM2)) / Math.sin(45 * RAD)
    const [low] = lightOn([flatPanel({ shade: tub })], {}).plane
    expect(low).toBeCloseTo(dome * Math.cos(40 * RAD) ** 2, 9)
    const [high] = lightOn([flatPanel({ shade: tub })], { elevationDeg: 45 }).plane
    expect(high).toBeCloseTo((800 + aroundSun) * Math.sin(45 * RAD) + dome * Math.cos(40 * RAD) ** 2, 9)
  })

  it('hides from a level deck what a horizon of the same rows hides, ground aside', () => {
    const rows = [
      { azimuthRad: 0.3, heightRad: 0.2 },
      { azimuthRad: 2, heightRad: 0.9 },
      { azimuthRad: 4, heightRad: 0.4 },
    ]
    const own = rows.map(({ azimuthRad, heightRad }) => ({ bearingRad: azimuthRad, heightRad, lostShare: 1 }))
    const around = horizon('around', rows)
    expect(shade('own', own).evenShare).toBeCloseTo(around.skyView, 12)
    for (let azimuthDeg = 0; azimuthDeg < 360; azimuthDeg += 7) {
      const [byCar] = lightOn([flatPanel({ shade: own })], { azimuthDeg }).plane
      const [byHills] = lightOn([flatPanel()], { azimuthDeg }, { horizon: around }).plane
      expect(byCar).toBeCloseTo(byHills, 9)
    }
  })

  it('is refused with the row, its value and what was expected', () => {
    const wrong = (rows: ShadeRow[]) => () => lightOn([flatPanel(), flatPanel({ shade: rows })], {})
    expect(wrong([])).toThrow(/^panels\[1\].shade: is empty/)
    expect(wrong(rowsOf([[0, 91, 10]]))).toThrow(/^panels\[1\].shade\[0\].heightRad: is 1.58/)
    expect(wrong(rowsOf([[0, 20, 101]]))).toThrow(/^panels\[1\].shade\[0\].lostShare: is 1.01, expected 0 to 1/)
    const backwards = rowsOf([
      [90, 20, 10],
      [80, 20, 10],
    ])
    expect(wrong(backwards)).toThrow(/^panels\[1\].shade\[1\]: is at 1.39/)
  })
})

const whole = (min: number, max: number) => fc.integer({ min: min * 1000, max: max * 1000 }).map((n) => n / 1000)
const anyShade: fc.Arbitrary<ShadeRow[]> = fc
  .uniqueArray(fc.integer({ min: 0, max: 359 }), { minLength: 1, maxLength: 8 })
  .chain((bearings) =>
    fc
      .array(fc.tuple(whole(0, 80), whole(0, 100)), { minLength: bearings.length, maxLength: bearings.length })
      .map((rows) => rowsOf(bearings.sort((a, b) => a - b).map((bearing, i) => [bearing, ...rows[i]]))),
  )
const anyInstant = fc.record({
  elevationDeg: whole(0, 90),
  azimuthDeg: whole(0, 360),
  dni: whole(0, 950),
  dhi: whole(0, 400),
  headingDeg: whole(0, 360),
  gradeDeg: whole(-5, 5),
  lifted: fc.boolean(),
})

describe('for any shade, sun and pose', () => {
  it('panels that mirror each other get the same on a north–south road at solar noon', () => {
    let [counted, shaded] = [0, 0]
    fc.assert(
      fc.property(
        anyShade,
        anyInstant,
        fc.tuple(whole(-20, 20), whole(0, 30)),
        fc.boolean(),
        (rows, instant, [pitch, roll], isNorth) => {
          const mirrored = rows
            .map((row) => ({ ...row, bearingRad: (2 * Math.PI - row.bearingRad) % (2 * Math.PI) }))
            .sort((a, b) => a.bearingRad - b.bearingRad)
          const noon = { ...instant, azimuthDeg: isNorth ? 0 : 180, headingDeg: isNorth ? 180 : 0 }
          const pose = { pitchRad: pitch * RAD, incidence: 'physical' as const }
          const right = flatPanel({ ...pose, rollRad: roll * RAD, shade: rows })
          const left = flatPanel({ ...pose, rollRad: -roll * RAD, shade: mirrored })
          const { plane, effective } = lightOn([right, left], noon, { albedo: 0.3 })
          expect(plane[1]).toBeCloseTo(plane[0], 8)
          expect(effective[1]).toBeCloseTo(effective[0], 8)
          counted++
          const [open] = lightOn([flatPanel({ ...pose, rollRad: roll * RAD })], noon, { albedo: 0.3 }).plane
          if (plane[0] < open - 20) shaded++
        },
      ),
      { numRuns: 300, seed: 5 },
    )
    expect(counted).toBe(300)
    expect(shaded).toBeGreaterThan(50)
  })

  it('light is never more than without it, and the same to the last bit by a table that takes nothing', () => {
    fc.assert(
      fc.property(anyShade, anyInstant, fc.tuple(whole(-30, 30), whole(-30, 30)), (rows, instant, [pitch, roll]) => {
        const pose = { pitchRad: pitch * RAD, rollRad: roll * RAD, incidence: 'martin-ruiz' as const }
        for (const skyModel of ['hay-davies', 'perez'] as const) {
          const none = rows.map((row) => ({ ...row, lostShare: 0 }))
          const panels = [flatPanel(pose), flatPanel({ ...pose, shade: none }), flatPanel({ ...pose, shade: rows })]
          const { plane, effective } = lightOn(panels, instant, { albedo: 0.2, skyModel })
          expect([plane[1], effective[1]]).toEqual([plane[0], effective[0]])
          expect(plane[2]).toBeLessThanOrEqual(plane[0])
          expect(effective[2]).toBeLessThanOrEqual(effective[0])
          expect(effective[2]).toBeGreaterThanOrEqual(0)
        }
      }),
      { numRuns: 300, seed: 6 },
    )
  })
})
