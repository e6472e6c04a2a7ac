import { describe, expect, it } from 'vitest'
import { arrayHarvest, type ArrayHarvest, prepareArray } from '../../server/engine/array.ts'
import type { LightAlong } from '../../server/engine/panel-light.ts'
import { prepareSky, weatherAlong } from '../../server/engine/sky.ts'
import { sunPath } from '../../server/engine/sun.ts'
import { type Chain, chainArray, chainSky, chainSteps, totalW, trapezoidWh } from '../bench/chain-day.mjs'
import { referenceRows, referenceText } from '../support/reference.ts'

// Source of every expected value: test/reference/chain.json and chain.csv, computed by the independent library that
// they name, a day of three panels and seven strings over 420 km.
const RAD = Math.PI / 180
const CHAIN: Chain = JSON.parse(referenceText('chain.json'))
const ROWS = referenceRows('chain.csv')
const COVERS = [
  { incidence: 'none', power: 'p_total_w', total60: 'wh_total_60s', total1: 'wh_total_1s' },
  { incidence: 'physical', power: 'p_total_iam_w', total60: 'wh_total_iam_60s', total1: 'wh_total_iam_1s' },
] as const
const off = (got: number, want: number): number => Math.abs(got - want) / Math.abs(want)

/** The day as a forecast runs it: sun, sky, panels, cells, strings. */
function harvestOf(stepS: number, incidence: 'none' | 'physical', exact: boolean): ArrayHarvest {
  const { along, pose } = chainSteps(CHAIN, stepS)
  const path = sunPath(along.atMs[0], along.atMs[along.count - 1])
  const weather = weatherAlong(prepareSky(chainSky(CHAIN)), path, along)
  return arrayHarvest(prepareArray(chainArray(CHAIN, incidence)), { weather, ...pose, exact })
}

/** The same, fed the table's own sun, sky and air. */
function harvestOfTable(incidence: 'none' | 'physical'): ArrayHarvest {
  const column = (name: string): Float64Array => Float64Array.from(ROWS, (row) => Number(row[name]))
  const zenith = column('app_zenith_deg').map((deg) => deg * RAD)
  const azimuth = column('azimuth_deg').map((deg) => deg * RAD)
  const weather: LightAlong = {
    sun: {
      east: zenith.map((z, i) => Math.sin(z) * Math.sin(azimuth[i])),
      north: zenith.map((z, i) => Math.sin(z) * Math.cos(azimuth[i])),
      up: zenith.map((z) => Math.cos(z)),
    },
    apparentZenithRad: zenith,
    extraWm2: column('dni_extra'),
    airMass: column('am_rel'),
    ghiWm2: column('ghi'),
    dniWm2: column('dni'),
    dhiWm2: column('dhi'),
    airC: column('t_air_c'),
  }
  return arrayHarvest(prepareArray(chainArray(CHAIN, incidence)), {
    weather,
    ...chainSteps(CHAIN, 60).pose,
    exact: true,
  })
}

describe('the reference day', () => {
  it('is driven where and when the table drives it', () => {
    const { along, pose, distKm } = chainSteps(CHAIN, 60)
    expect(along.count).toBe(CHAIN.expected.rows)
    ROWS.forEach((row, i) => {
      expect(along.atMs[i]).toBe(Date.parse(row.utc))
      expect(distKm[i]).toBeCloseTo(Number(row.dist_km), 8)
      expect(along.latRad[i] / RAD).toBeCloseTo(Number(row.lat_deg), 8)
      expect(along.lonRad[i] / RAD).toBeCloseTo(Number(row.lon_deg), 8)
      expect(along.altM[i]).toBeCloseTo(Number(row.alt_m), 6)
      expect(pose.headingRad[i] / RAD).toBeCloseTo(Number(row.heading_deg), 9)
      expect(pose.airSpeedMps[i]).toBeCloseTo(Number(row.speed_mps), 8)
    })
  })

  it('fed the table’s sun and sky, gives its light, warmth and power to 1e-6 on every panel at every step', () => {
    for (const { incidence, power, total60 } of COVERS) {
      const harvest = harvestOfTable(incidence)
      const watts = totalW(harvest)
      let [counted, worst] = [0, 0]
      ROWS.forEach((row, i) => {
        CHAIN.panels.forEach(({ name, strings }, p) => {
          const first = CHAIN.panels.slice(0, p).reduce((sum, panel) => sum + panel.strings, 0)
          const string = Number(row[incidence === 'none' ? `${name}_pmp_string_w` : `${name}_pmp_iam_string_w`])
          worst = Math.max(worst, off(harvest.planeWm2[p][i], Number(row[`${name}_poa`])))
          worst = Math.max(worst, off(harvest.cellC[p][i], Number(row[`${name}_t_cell_c`])))
          for (let s = first; s < first + strings; s++) worst = Math.max(worst, off(harvest.bestW[s][i], string))
        })
        worst = Math.max(worst, off(watts[i], Number(row[power])))
        counted++
      })
      expect(counted).toBe(CHAIN.expected.rows)
      expect(worst, incidence).toBeLessThan(5e-8)
      expect(off(trapezoidWh(watts, 60), CHAIN.expected[total60])).toBeLessThan(2e-9)
    }
  })

  it('by the engine’s own sun and sky, ends within 0.001 % of the day’s energy, by tables within 0.006 %', () => {
    for (const { incidence, total60, total1 } of COVERS) {
      for (const exact of [true, false]) {
        const wh = trapezoidWh(totalW(harvestOf(60, incidence, exact)), 60)
        expect(off(wh, CHAIN.expected[total60]), `${incidence}, exact ${exact}: ${wh} Wh`).toBeLessThan(
          exact ? 1e-5 : 6e-5,
        )
      }
      const wh = trapezoidWh(totalW(harvestOf(1, incidence, false)), 1)
      expect(off(wh, CHAIN.expected[total1]), `${incidence}, 1 s steps: ${wh} Wh`).toBeLessThan(6e-5)
    }
  })

  it('by the engine’s own sun and sky, meets every step’s power to 0.01 % above 15° of sun and 0.025 % above 5°', () => {
    for (const { incidence, power } of COVERS)
      for (const exact of [true, false]) {
        const watts = totalW(harvestOf(60, incidence, exact))
        const worst = { high: 0, low: 0 }
        const counted = { high: 0, low: 0 }
        ROWS.forEach((row, i) => {
          const elevation = Number(row.elevation_deg)
          if (elevation <= 5) return
          const band = elevation > 15 ? 'high' : 'low'
          worst[band] = Math.max(worst[band], off(watts[i], Number(row[power])))
          counted[band]++
        })
        expect(counted).toEqual({ high: 602, low: 59 })
        const [high, low] = exact ? [1e-4, 2.5e-4] : [1.5e-4, 3.2e-4]
        expect(worst.high, `${incidence}, exact ${exact}`).toBeLessThan(high)
        expect(worst.low, `${incidence}, exact ${exact}`).toBeLessThan(low)
      }
  })
})
