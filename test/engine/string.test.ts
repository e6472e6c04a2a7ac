import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { type CellReference, deSoto, maximumPower, voltageAtCurrent } from '../../server/engine/cell.ts'
import { bestOfCells, exactBestOfCells, powerTable, TABLE_RANGE } from '../../server/engine/power-table.ts'
import type { LitSubstring } from '../../server/engine/string-runs.ts'
import { bestOfSubstrings, powerOfSubstringsAtV, stringBest } from '../../server/engine/string.ts'
import type { StringModel } from '../../server/engine/substrings.ts'
import { referenceRows } from '../support/reference.ts'

/** The three kinds of string in test/reference/cell.csv: A and B silicon, C gallium arsenide, all invented. */
const KINDS = new Map<string, CellReference>(
  referenceRows('cell.csv').map((row) => [
    row.string,
    {
      lightA: Number(row.I_L_ref),
      saturationA: Number(row.I_o_ref),
      seriesOhm: Number(row.R_s),
      shuntOhm: Number(row.R_sh_ref),
      modifiedIdealityV: Number(row.a_ref),
      currentCoefficientAPerC: Number(row.alpha_sc),
      bandGapEv: Number(row.EgRef),
      bandGapPerC: Number(row.dEgdT),
    },
  ]),
)
const CELLS_IN_A = 38
const [A] = KINDS.values()
/** One cell of string A. */
const CELL: CellReference = {
  ...A,
  seriesOhm: A.seriesOhm / CELLS_IN_A,
  shuntOhm: A.shuntOhm / CELLS_IN_A,
  modifiedIdealityV: A.modifiedIdealityV / CELLS_IN_A,
}

describe('cells in series in unequal light', () => {
  /** A section with an almost square curve: best point at 10 V, open circuit 1 % above, as square as a double allows. */
  function squareSection(sectionA: number, dropV: number): LitSubstring {
    const thermalV = 0.0145
    const saturationA = sectionA * Math.exp(-10.0947 / thermalV)
    const diode = { lightA: sectionA, saturationA, seriesOhm: 0, shuntOhm: 1e12, thermalV }
    return { parts: [{ diode, cells: 1 }], dropV }
  }

  // Source: three worked cases of 10 V sections, computed by hand: min current of all, or the dark section bypassed.
  it('gives 135 W from 6, 6 and 4.5 A, and 117 W from 6, 6 and 3 A, or 119.7 W past an active bypass', () => {
    const CASES = [
      { amps: [6, 6, 4.5], dropV: 0.5, expectedW: 135 },
      { amps: [6, 6, 3], dropV: 0.5, expectedW: 117 },
      { amps: [6, 6, 3], dropV: 0.05, expectedW: 119.7 },
    ]
    for (const { amps, dropV, expectedW } of CASES) {
      const best = bestOfSubstrings(amps.map((each) => squareSection(each, dropV)))
      expect(Math.abs(best.W / expectedW - 1), `${amps.join()} gives ${best.W}`).toBeLessThan(0.0045)
    }
    // Source: by hand, 6·10 + 6·10 + 4.5·10: what the cells would give one by one.
    const alone = [6, 6, 4.5].reduce((sum, each) => sum + maximumPower(squareSection(each, 0.5).parts[0].diode).W, 0)
    expect(Math.abs(alone / 165 - 1)).toBeLessThan(0.002)
  })

  const lit = (cells: number, light: number, celsius: number, dropV = 0.5): LitSubstring => ({
    parts: [{ diode: deSoto(CELL, light, celsius), cells }],
    dropV,
  })
  /** The string's voltage at a current, each group at its own or, where that is lower, at its bypass drop. */
  const seriesV = (groups: LitSubstring[], amps: number): number =>
    groups.reduce((sum, { parts, dropV }) => {
      const own = parts.reduce(
        (volts, { diode, cells }) => volts + (diode.lightA > 0 ? cells * voltageAtCurrent(diode, amps) : -Infinity),
        0,
      )
      return sum + Math.max(own, -dropV)
    }, 0)

  it('finds the highest hill that a scan over every current finds', () => {
    let counted = 0
    for (const lights of [
      [900, 850, 300],
      [1000, 1000, 60],
      [500, 480, 470],
      [700, 0, 650],
      [5, 3, 800],
      [120, 900, 500],
    ])
      for (const warm of [-5, 25, 65]) {
        const groups = lights.map((light, i) => lit(10 + 4 * i, light, warm + 3 * i))
        const best = bestOfSubstrings(groups)
        let scanned = 0
        for (let amps = 0.002; amps < 7; amps += 0.002) scanned = Math.max(scanned, amps * seriesV(groups, amps))
        expect(best.W, `${lights.join()} at ${warm} °C`).toBeGreaterThanOrEqual(scanned * (1 - 1e-9))
        expect(best.W / scanned - 1).toBeLessThan(2e-6)
        expect(Math.abs(seriesV(groups, best.A) / best.V - 1)).toBeLessThan(1e-9)
        counted++
      }
    expect(counted).toBe(18)
  })

  it('gives no more than its cells alone and, in one light on two panels, as much as on one', () => {
    const light = fc.double({ min: 1, max: 1200, noNaN: true })
    const warmth = fc.double({ min: -10, max: 80, noNaN: true })
    fc.assert(
      fc.property(light, light, warmth, (one, other, celsius) => {
        const groups = [lit(20, one, celsius), lit(12, other, celsius)]
        const alone = groups.reduce((sum, group) => sum + bestOfSubstrings([group]).W, 0)
        expect(bestOfSubstrings(groups).W).toBeLessThanOrEqual(alone * (1 + 1e-9))
        const split = bestOfSubstrings([lit(20, one, celsius), lit(12, one, celsius)]).W
        expect(Math.abs(split / bestOfSubstrings([lit(32, one, celsius)]).W - 1)).toBeLessThan(1e-9)
      }),
      { numRuns: 300 },
    )
  })

  it('gives at a held voltage what the curve has there, most at its best point, nothing above open circuit', () => {
    for (const groups of [
      [lit(38, 800, 40)],
      [lit(20, 900, 45), lit(18, 400, 45)],
      [lit(20, 900, 45), lit(18, 0, 20)],
    ]) {
      const best = bestOfSubstrings(groups)
      expect(Math.abs(powerOfSubstringsAtV(groups, best.V) / best.W - 1)).toBeLessThan(1e-9)
      for (const volts of [0.2, 2, 5, 9, 11, 14, 18, 21, 24, 26]) {
        const watts = powerOfSubstringsAtV(groups, volts)
        expect(watts).toBeLessThanOrEqual(best.W * (1 + 1e-12))
        if (watts > 0) expect(seriesV(groups, watts / volts)).toBeCloseTo(volts, 6)
        else expect(seriesV(groups, 1e-6)).toBeLessThan(volts)
      }
      expect(powerOfSubstringsAtV(groups, 40)).toBe(0)
      expect(powerOfSubstringsAtV(groups, 0)).toBe(0)
    }
  })

  it('gives exactly nothing in the dark, and current past a dark group', () => {
    expect(bestOfSubstrings([lit(20, 0, 10), lit(12, 0, 10)])).toEqual({ W: 0, V: 0, A: 0 })
    const past = bestOfSubstrings([lit(20, 800, 25), lit(12, 0, 25)])
    const alone = bestOfSubstrings([lit(20, 800, 25)])
    expect(past.W).toBeLessThan(alone.W)
    expect(past.W).toBeGreaterThan(alone.W - 0.5 * 5.2)
  })

  // Source: by hand: two rows carry twice the current; dust of 10 % is 10 % less light.
  it('scales with rows in parallel, and dust takes its share of the light', () => {
    const one: StringModel = {
      name: 'one',
      cell: CELL,
      groups: [{ panel: 0, cellsInSeries: CELLS_IN_A }],
      cellsInParallel: 1,
      soilingFraction: 0,
      bypassV: 0.5,
    }
    const clean = stringBest(one, [900], [40])
    const two = stringBest({ ...one, cellsInParallel: 2 }, [900], [40])
    expect(two).toEqual({ W: 2 * clean.W, V: clean.V, A: 2 * clean.A })
    expect(stringBest({ ...one, soilingFraction: 0.1 }, [1000], [40]).W).toBeCloseTo(clean.W, 10)
    // Source: test/reference/cell.csv case 1: string A of 38 cells at 1000 W/m², 25 °C.
    expect(stringBest(one, [1000], [25]).W).toBeCloseTo(138.979683469, 7)
  })
})

describe('power tables', () => {
  const grid = (lights: number[], temperatures: number[]): { effectiveWm2: Float64Array; cellC: Float64Array } => {
    const pairs = lights.flatMap((light) => temperatures.map((celsius) => [light, celsius]))
    return {
      effectiveWm2: Float64Array.from(pairs, ([light]) => light),
      cellC: Float64Array.from(pairs, ([, celsius]) => celsius),
    }
  }
  const both = (cell: CellReference, light: ReturnType<typeof grid>) => {
    const room = () => ({ W: new Float64Array(light.cellC.length), V: new Float64Array(light.cellC.length) })
    const [table, exact] = [room(), room()]
    const scale = { cleanFraction: 1, cells: 1, cellsInSeries: 1 }
    bestOfCells(powerTable(cell), scale, light, table)
    exactBestOfCells(cell, scale, light, exact)
    return { table, exact }
  }

  it('stay within 0.04 % of the exact power and voltage from 5 to 1300 W/m² and −10 to 90 °C', () => {
    const lights = Array.from({ length: 400 }, (_, i) => 5 * (1300 / 5) ** (i / 399))
    const temperatures = Array.from({ length: 77 }, (_, i) => -10 + (100 * i) / 76)
    for (const [name, cell] of KINDS) {
      const { table, exact } = both(cell, grid(lights, temperatures))
      let worst = 0
      for (let i = 0; i < exact.W.length; i++)
        worst = Math.max(worst, Math.abs(table.W[i] / exact.W[i] - 1), Math.abs(table.V[i] / exact.V[i] - 1))
      expect(worst, name).toBeLessThan(4e-4)
    }
    expect(KINDS.size).toBe(3)
  })

  it('fade to nothing with the light and give exactly nothing in the dark', () => {
    const lights = [0, 1e-9, 1e-6, 1e-3, 0.01, 0.1, 1, 2, 5]
    for (const cell of KINDS.values()) {
      const { table, exact } = both(cell, grid(lights, [20]))
      expect([table.W[0], table.V[0]]).toEqual([0, 0])
      for (let i = 1; i < lights.length; i++) {
        expect(table.W[i]).toBeGreaterThan(table.W[i - 1])
        expect(Math.abs(table.W[i] - exact.W[i])).toBeLessThan(2e-4)
      }
    }
  })

  it('hand over to the exact solution beyond their range', () => {
    const beyond = [TABLE_RANGE.maxWm2 + 1, 2500]
    for (const light of [grid(beyond, [20]), grid([800], [TABLE_RANGE.minC - 1, TABLE_RANGE.maxC + 1])]) {
      const { table, exact } = both(A, light)
      expect(table).toEqual(exact)
    }
  })
})
