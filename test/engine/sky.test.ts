import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { airDensityKgM3, pressureAtPa, standardPressurePa } from '../../server/engine/air.ts'
import { cloudTransmission, erbs } from '../../server/engine/decompose.ts'
import { prepareSky, type SkyPlaceInput, skyCoverage, weatherAlong } from '../../server/engine/sky.ts'
import { type Along, sunPath } from '../../server/engine/sun.ts'
import { DAY_START_MS, exactClearSky, HOUR_MS, mean, middles, rowsOf, SALTPAN, weatherAt } from './sky-scenes.ts'

const HOURS = rowsOf(24, HOUR_MS)
const noon = Float64Array.of(DAY_START_MS + 10.5 * HOUR_MS)
const filled = (count: number, value: number): Float64Array => new Float64Array(count).fill(value)

/** The clear sky's mean over every row, in steps of 10 s: the truth that tables are made from. */
const CLEAR = Array.from(HOURS.fromMs, (from, row) => {
  const weather = weatherAt([{ ...SALTPAN, ...HOURS }], middles(from, HOURS.toMs[row], 360))
  const beam = weather.ghiWm2.map((ghi, i) => ghi - weather.dhiWm2[i])
  return { ghi: mean(weather.ghiWm2), dni: mean(weather.dniWm2), dhi: mean(weather.dhiWm2), beam: mean(beam) }
})
const LIT = CLEAR.map((clear, row) => ({ ...clear, row })).filter((clear) => clear.ghi > 0.05)

/** Mean of what the sky gives back over a row of a table. */
function returned(place: SkyPlaceInput, row: number) {
  const weather = weatherAt([place], middles(place.fromMs[row], place.toMs[row], 360))
  return { ghi: mean(weather.ghiWm2), dni: mean(weather.dniWm2), dhi: mean(weather.dhiWm2), weather }
}

const indices = (low: number, high: number) =>
  fc.array(fc.double({ min: low, max: high, noNaN: true }), { minLength: 24, maxLength: 24 })

/** Within 0.5 % of the row or, for the last light of a row, 2 J/m² each hour. */
const expectBack = (value: number, given: number, what: string): void =>
  expect(Math.abs(value - given), `${what}: ${value} for ${given}`).toBeLessThan(Math.max(0.005 * given, 6e-4))

describe('a day’s rows come back hour by hour within 0.5 %, sunrise and sunset included', () => {
  it('over rows that hold a sunrise and a sunset in their middle', () => {
    expect(LIT.length).toBe(13)
    expect(LIT[0].ghi).toBeLessThan(20)
    expect(LIT[LIT.length - 1].ghi).toBeLessThan(70)
  })

  it('for global irradiance alone', () => {
    fc.assert(
      fc.property(indices(0, 1.2), (k) => {
        const place = { ...SALTPAN, ...HOURS, ghiWm2: Float64Array.from(CLEAR, ({ ghi }, row) => k[row] * ghi) }
        for (const { row } of LIT) expectBack(returned(place, row).ghi, place.ghiWm2[row], `row ${row}`)
      }),
      { numRuns: 25, seed: 7 },
    )
  })

  it.each(['ghi and dni', 'ghi and dhi', 'dni and dhi', 'all three'])('for %s', (which) => {
    fc.assert(
      fc.property(indices(0, 1.1), indices(0.5, 2), (kB, kD) => {
        const truth = {
          ghiWm2: Float64Array.from(CLEAR, ({ beam, dhi }, row) => kB[row] * beam + kD[row] * dhi),
          dniWm2: Float64Array.from(CLEAR, ({ dni }, row) => kB[row] * dni),
          dhiWm2: Float64Array.from(CLEAR, ({ dhi }, row) => kD[row] * dhi),
        }
        const place: SkyPlaceInput = { ...SALTPAN, ...HOURS }
        if (which !== 'dni and dhi') place.ghiWm2 = truth.ghiWm2
        if (which !== 'ghi and dhi') place.dniWm2 = truth.dniWm2
        if (which !== 'ghi and dni') place.dhiWm2 = truth.dhiWm2
        for (const { row } of LIT) {
          const back = returned(place, row)
          if (place.dniWm2) expectBack(back.dni, place.dniWm2[row], `dni ${row}`)
          if (place.ghiWm2) expectBack(back.ghi, place.ghiWm2[row], `ghi ${row}`)
          if (place.dhiWm2 && which !== 'all three') expectBack(back.dhi, place.dhiWm2[row], `dhi ${row}`)
        }
      }),
      { numRuns: 15, seed: 11 },
    )
  })

  it('for cloud cover, as Kasten–Czeplak’s share of the row’s clear sky', () => {
    fc.assert(
      fc.property(indices(0, 1), (cloud) => {
        const place = { ...SALTPAN, ...HOURS, cloudFraction: Float64Array.from(cloud) }
        for (const { row, ghi } of LIT)
          expectBack(returned(place, row).ghi, cloudTransmission(cloud[row]) * ghi, `${row}`)
      }),
      { numRuns: 25, seed: 13 },
    )
  })

  it('whether rows are 20 minutes or 3 hours long', () => {
    for (const [count, length] of [
      [72, HOUR_MS / 3],
      [8, 3 * HOUR_MS],
    ]) {
      const rows = rowsOf(count, length)
      const clear = Array.from(rows.fromMs, (_, row) => returned({ ...SALTPAN, ...rows }, row).ghi)
      const place = {
        ...SALTPAN,
        ...rows,
        ghiWm2: Float64Array.from(clear, (ghi, row) => ghi * (0.3 + (row % 3) * 0.3)),
      }
      for (let row = 0; row < count; row++) expectBack(returned(place, row).ghi, place.ghiWm2[row], `${count}: ${row}`)
    }
  })
})

describe('a cloudless table', () => {
  it('is exactly the clear sky when it says cover 0', () => {
    const atMs = middles(DAY_START_MS, DAY_START_MS + 24 * HOUR_MS, 500)
    const clear = weatherAt([{ ...SALTPAN, ...HOURS }], atMs)
    const cover = weatherAt([{ ...SALTPAN, ...HOURS, cloudFraction: filled(24, 0) }], atMs)
    expect(cover.ghiWm2).toEqual(clear.ghiWm2)
    expect(cover.dniWm2).toEqual(clear.dniWm2)
    expect(cover.dhiWm2).toEqual(clear.dhiWm2)
    expect(mean(clear.ghiWm2)).toBeGreaterThan(200)
  })

  it('is the clear sky within 0.01 % when it gives the clear sky’s own hours', () => {
    const atMs = middles(DAY_START_MS, DAY_START_MS + 24 * HOUR_MS, 500)
    const clear = weatherAt([{ ...SALTPAN, ...HOURS }], atMs)
    const place = {
      ...SALTPAN,
      ...HOURS,
      ghiWm2: Float64Array.from(CLEAR, ({ ghi }) => ghi),
      dniWm2: Float64Array.from(CLEAR, ({ dni }) => dni),
    }
    const back = weatherAt([place], atMs)
    const worst = clear.ghiWm2.reduce((most, ghi, i) => Math.max(most, Math.abs(back.ghiWm2[i] - ghi)), 0)
    expect(worst).toBeLessThan(0.1)
  })
})

describe('global irradiance alone', () => {
  it('is split by Erbs at each step', () => {
    const place = { ...SALTPAN, ...HOURS, ghiWm2: Float64Array.from(CLEAR, ({ ghi }) => ghi * 0.6) }
    const { ghiWm2, dniWm2, dhiWm2, extraWm2, sun } = weatherAt([place], noon)
    const split = erbs(ghiWm2[0], Math.acos(sun.up[0]), extraWm2[0])
    expect(dniWm2[0]).toBeCloseTo(split.dni, 9)
    expect(dhiWm2[0]).toBeCloseTo(split.dhi, 9)
    expect(split.dni).toBeGreaterThan(50)
  })
})

describe('rows that do not close', () => {
  const place = (ghi: number, dni: number, dhi: number): SkyPlaceInput => ({
    ...SALTPAN,
    ...HOURS,
    ghiWm2: Float64Array.from(CLEAR, (clear) => ghi * clear.ghi),
    dniWm2: Float64Array.from(CLEAR, (clear) => dni * clear.dni),
    dhiWm2: Float64Array.from(CLEAR, (clear) => dhi * clear.dhi),
  })

  it('keep GHI and DNI, and the diffuse is what GHI leaves', () => {
    const back = returned(place(1, 0.8, 9), 10)
    expectBack(back.ghi, CLEAR[10].ghi, 'ghi')
    expectBack(back.dni, 0.8 * CLEAR[10].dni, 'dni')
  })

  it('keep GHI and DHI where the beam alone would be more than GHI, and say so', () => {
    const input = place(0.5, 1, 1)
    const back = returned(input, 10)
    expectBack(back.ghi, 0.5 * CLEAR[10].ghi, 'ghi')
    expectBack(back.dhi, CLEAR[10].dhi, 'dhi')
    const { notes } = prepareSky({ places: [input], linkeDefault: 3 })
    expect(notes).toContainEqual({ column: 'dniWm2', row: 10, what: 'beam-over-global', place: 0 })
  })

  it('are noted when they bring light in the dark or more than the sun could give', () => {
    const ghiWm2 = filled(24, Number.NaN)
    ghiWm2[0] = 400
    ghiWm2[LIT[0].row] = 1500
    const { notes } = prepareSky({ places: [{ ...SALTPAN, ...HOURS, ghiWm2 }], linkeDefault: 3 })
    expect(notes.map(({ row, what }) => [row, what])).toEqual([
      [0, 'light-while-dark'],
      [LIT[0].row, 'index-limited'],
    ])
  })
})

describe('the time a row speaks for', () => {
  const airC = Float64Array.from({ length: 24 }, (_, row) => 10 + 8 * Math.sin(row / 3))

  it('is honoured for the preceding hour, the following hour and the instant', () => {
    const stamps = HOURS.fromMs
    const preceding = { fromMs: stamps.map((at) => at - HOUR_MS), toMs: stamps }
    const instant = { fromMs: stamps, toMs: stamps }
    const meanOver = (intervals: { fromMs: Float64Array; toMs: Float64Array }, from: number): number =>
      mean(weatherAt([{ ...SALTPAN, ...intervals, airC }], middles(from, from + HOUR_MS, 60)).airC)
    expect(meanOver(HOURS, stamps[9])).toBeCloseTo(airC[9], 9)
    expect(meanOver(preceding, stamps[9] - HOUR_MS)).toBeCloseTo(airC[9], 9)
    expect(weatherAt([{ ...SALTPAN, ...instant, airC }], stamps.slice(0, 1)).airC[0]).toBeCloseTo(airC[0], 9)
    expect(meanOver(instant, stamps[9])).toBeCloseTo((airC[9] + airC[10]) / 2, 9)
  })

  it('may differ by column', () => {
    const intervalOf = { airC: { fromMs: HOURS.fromMs.map((at) => at - HOUR_MS), toMs: HOURS.fromMs } }
    const place = { ...SALTPAN, ...HOURS, airC, vapourPa: airC.map((air) => air * 50), intervalOf }
    const weather = weatherAt([place], middles(HOURS.fromMs[9], HOURS.toMs[9], 60))
    expect(mean(weather.airC)).toBeCloseTo(airC[10], 9)
    expect(mean(weather.vapourPa)).toBeCloseTo(airC[9] * 50, 6)
    expect(skyCoverage(prepareSky({ places: [place], linkeDefault: 3 }))).toEqual({
      fromMs: HOURS.fromMs[0],
      toMs: HOURS.fromMs[23],
    })
  })

  it('is bridged where a row is missing, and a dark hour takes its neighbours’ index', () => {
    const gap = airC.slice()
    gap[9] = Number.NaN
    const weather = weatherAt([{ ...SALTPAN, ...HOURS, airC: gap }], middles(HOURS.fromMs[9], HOURS.toMs[9], 60))
    expect(mean(weather.airC)).toBeGreaterThan(Math.min(airC[8], airC[10]))
    expect(mean(weather.airC)).toBeLessThan(Math.max(airC[8], airC[10]))
    const ghiWm2 = Float64Array.from(CLEAR, ({ ghi }, row) => (row < 10 ? 0.5 * ghi : Number.NaN))
    const bridged = returned({ ...SALTPAN, ...HOURS, ghiWm2 }, 12)
    expect(bridged.ghi / CLEAR[12].ghi).toBeCloseTo(0.5, 3)
  })
})

describe('several places', () => {
  const at = (latDeg: number, cloud: number, airC: number, fromRad: number): SkyPlaceInput => ({
    ...SALTPAN,
    latRad: (latDeg * Math.PI) / 180,
    ...HOURS,
    cloudFraction: filled(24, cloud),
    airC: filled(24, airC),
    windMps: filled(24, 4),
    windFromRad: filled(24, fromRad),
  })
  const south = at(-24, 0, 10, 6.2)
  const north = at(-22, 1, 20, 0.2)

  it('count by inverse distance squared', () => {
    const place = { latRad: (-23.5 * Math.PI) / 180 }
    const along: Along = {
      count: 1,
      atMs: noon,
      latRad: filled(1, place.latRad),
      lonRad: filled(1, SALTPAN.lonRad),
      altM: filled(1, 1210),
    }
    const path = sunPath(DAY_START_MS, DAY_START_MS + 24 * HOUR_MS)
    const weather = weatherAlong(prepareSky({ places: [south, north], linkeDefault: 3 }), path, along)
    const clear = weatherAlong(
      prepareSky({ places: [{ ...south, cloudFraction: undefined }], linkeDefault: 3 }),
      path,
      along,
    )
    // distances 0.5 and 1.5 degrees: weights 0.9 and 0.1, by hand
    expect(weather.airC[0]).toBeCloseTo(11, 6)
    expect(weather.ghiWm2[0] / clear.ghiWm2[0]).toBeCloseTo(0.9 + 0.1 * 0.25, 5)
    expect(weather.windFromRad[0]).toBeCloseTo(6.2 + 0.1 * (0.2 + 2 * Math.PI - 6.2), 6)
    expect(weather.windMps[0]).toBeCloseTo(4, 12)
  })

  it('leave each place its own sky', () => {
    const blended = weatherAt([south, north], noon)
    const alone = weatherAt([south], noon)
    expect(blended.ghiWm2[0]).toBeCloseTo(alone.ghiWm2[0], 4)
    expect(blended.airC[0]).toBeCloseTo(10, 6)
  })

  it('may bring different columns, each blended over those that have it', () => {
    const { airC: _, ...withoutAir } = north
    expect(weatherAt([withoutAir, south], noon).airC[0]).toBeCloseTo(10, 9)
  })
})

describe('air at the road', () => {
  it('is brought from the place’s height to the road’s', () => {
    const place = {
      ...SALTPAN,
      ...HOURS,
      airC: filled(24, 24),
      pressurePa: filled(24, 88_000),
      vapourPa: filled(24, 900),
    }
    const along: Along = {
      count: 1,
      atMs: noon,
      latRad: filled(1, -0.4),
      lonRad: filled(1, 0.27),
      altM: filled(1, 1710),
    }
    const path = sunPath(DAY_START_MS, DAY_START_MS + 24 * HOUR_MS)
    const weather = weatherAlong(prepareSky({ places: [place], linkeDefault: 3 }), path, along)
    const pressurePa = pressureAtPa(88_000, 1210, 1710, 24)
    expect(weather.airC[0]).toBeCloseTo(24 - 3.25, 9)
    expect(weather.pressurePa[0]).toBeCloseTo(pressurePa, 5)
    expect(weather.vapourPa[0]).toBeCloseTo((900 * pressurePa) / 88_000, 6)
    expect(weather.densityKgM3[0]).toBeCloseTo(airDensityKgM3(pressurePa, 20.75, weather.vapourPa[0]), 9)
    const level = weatherAlong(prepareSky({ places: [place], linkeDefault: 3, lapseCPerM: 0 }), path, along)
    expect(level.airC[0]).toBe(24)
  })

  it('is the standard atmosphere, dry and calm, where no place says otherwise', () => {
    const weather = weatherAt([{ ...SALTPAN, ...HOURS }], noon)
    expect(weather.airC[0]).toBeCloseTo(15 - 7.865, 9)
    expect(weather.pressurePa[0]).toBeCloseTo(standardPressurePa(1210), 3)
    expect([weather.vapourPa[0], weather.windMps[0], weather.gustMps[0]]).toEqual([0, 0, 0])
  })

  it('has gusts no weaker than the wind', () => {
    const wind = { windMps: filled(24, 7), windFromRad: filled(24, -1), gustMps: filled(24, 3) }
    const weather = weatherAt([{ ...SALTPAN, ...HOURS, ...wind }], noon)
    expect(weather.gustMps[0]).toBe(7)
    expect(weather.windFromRad[0]).toBeCloseTo(2 * Math.PI - 1, 12)
  })
})

it('the fast passes give sun, air mass and clear sky of the plain functions within 1e-6, from 1 W/m² up', () => {
  const count = 5000
  const steps = Float64Array.from({ length: count }, (_, i) => i)
  const along: Along = {
    count,
    atMs: steps.map((i) => DAY_START_MS + i * 34_000),
    latRad: steps.map((i) => 1.5 * Math.sin(i / 700)),
    lonRad: steps.map((i) => i / 900 - 3),
    altM: steps.map((i) => 1500 + 1400 * Math.sin(i / 40)),
  }
  const sky = prepareSky({ places: [{ ...SALTPAN, ...HOURS }], linkeDefault: 3.5 })
  const weather = weatherAlong(sky, sunPath(along.atMs[0], along.atMs[count - 1]), along)
  let lit = 0
  const worst = { apparentZenithRad: 0, airMass: 0, extraWm2: 0, ghi: 0, dni: 0, dhi: 0 }
  const note = (name: keyof typeof worst, value: number, expected: number): void => {
    worst[name] = Math.max(worst[name], Math.abs(value - expected) / Math.max(1, expected))
  }
  for (let i = 0; i < count; i++) {
    const exact = exactClearSky(along, weather, i, 3.5)
    note('apparentZenithRad', weather.apparentZenithRad[i], exact.apparentZenithRad)
    note('airMass', weather.airMass[i], exact.airMass)
    note('extraWm2', weather.extraWm2[i], exact.extraWm2)
    note('ghi', weather.ghiWm2[i], exact.ghi)
    note('dni', weather.dniWm2[i], exact.dni)
    note('dhi', weather.dhiWm2[i], exact.dhi)
    if (exact.ghi > 0) lit++
  }
  for (const [name, error] of Object.entries(worst)) expect(error, name).toBeLessThan(1e-6)
  expect(lit).toBeGreaterThan(2000)
})
