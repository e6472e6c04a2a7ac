import { describe, expect, it } from 'vitest'
import type { ArrayHarvest, PreparedArray } from '../../server/engine/array.ts'
import { type CellReference, deSoto, maximumPower } from '../../server/engine/cell.ts'
import { fillStrings, offBest, prepareStrings } from '../../server/engine/string-harvest.ts'
import { isSolvable } from '../../server/engine/string-solver.ts'
import { stringBest, stringBestBetweenV, stringPowerAtV } from '../../server/engine/string.ts'
import type { StringModel } from '../../server/engine/substrings.ts'
import { seeded } from './seeded.ts'
import {
  highestW,
  SQUARE_A,
  SQUARE_OPEN_V,
  SQUARE_THERMAL_V,
  solved,
  squareString,
  stringByChance,
} from './string-cases.ts'

describe('the fast solution of a string', () => {
  it('is within 0.0025 % of the exact best point, and of the power at a held voltage, in 20,000 strings', () => {
    const random = seeded(20261017)
    const counted = { groups: new Set<number>(), all: 0, faulty: 0, past: 0, held: 0, dark: 0 }
    for (let i = 0; i < 20_000; i++) {
      const one = stringByChance(random)
      const { string, lights, warmths } = one
      const [exact, fast] = [stringBest(string, lights, warmths), solved(one)]
      const what = (): string => JSON.stringify({ ...one, exact, fast })
      counted.all++
      if (exact.W === 0) {
        expect(fast.W, what()).toBe(0)
        counted.dark++
        continue
      }
      if (!(Math.abs(fast.W / exact.W - 1) < 2.5e-5)) expect.fail(`best ${what()}`)
      if (!(Math.abs(fast.A * fast.V - fast.W) <= 1e-12 * fast.W)) expect.fail(`point ${what()}`)
      const own = stringPowerAtV(string, lights, warmths, fast.V)
      if (!(Math.abs(own / fast.W - 1) < 2.5e-5)) expect.fail(`own voltage ${own} ${what()}`)
      const cells = string.groups.reduce((sum, { cellsInSeries }) => sum + cellsInSeries, 0)
      const volts = random() < 0.6 ? exact.V * (0.6 + 0.6 * random()) : cells * random()
      const heldW = stringPowerAtV(string, lights, warmths, volts)
      if (!(Math.abs(fast.heldW(volts) - heldW) < 5e-6 * heldW + 1e-6 * exact.W)) expect.fail(`${volts} V ${what()}`)
      counted.groups.add(string.groups.length)
      if (string.faults?.length === 1) counted.faulty++
      if (exact.A > 1.05 * Math.min(...lights) * (string.cell.lightA / 1000)) counted.past++
      if (heldW > 0) counted.held++
    }
    expect(counted.all).toBe(20_000)
    expect([...counted.groups].sort((a, b) => a - b)).toEqual([1, 2, 3, 4, 5, 6])
    expect(counted.faulty).toBeGreaterThan(5000)
    expect(counted.past).toBeGreaterThan(5000)
    expect(counted.held).toBeGreaterThan(10_000)
    expect(counted.dark).toBeLessThan(1000)
  }, 60_000)

  it('is as near in faint and in enhanced light, in frost and in heat', () => {
    const random = seeded(41)
    let [counted, faint] = [0, 0]
    for (let i = 0; i < 3000; i++) {
      const { string } = stringByChance(random)
      const dimmest = random() < 0.5 ? 0.001 : 900
      const lights = string.groups.map(() => dimmest * (2500 / dimmest) ** random())
      const warmth = -50 + 160 * random()
      const warmths = lights.map(() => warmth + 20 * random())
      const exact = stringBest(string, lights, warmths)
      const { W, V, heldW } = solved({ string, lights, warmths })
      const what = (): string => JSON.stringify({ string, lights, warmths, exact, W })
      if (!(Math.abs(W - exact.W) <= 3e-5 * exact.W)) expect.fail(what())
      if (!(Math.abs(heldW(V) - W) <= 3e-5 * W)) expect.fail(`${V} V ${what()}`)
      counted++
      if (W > 0 && Math.max(...lights) < 5) faint++
    }
    expect(counted).toBe(3000)
    expect(faint).toBeGreaterThan(100)
  }, 60_000)

  it('finds the best place between two voltages: a scan over them finds none better', () => {
    const random = seeded(31)
    const counted = { all: 0, inside: 0, edge: 0, away: 0 }
    for (let i = 0; i < 600; i++) {
      const one = stringByChance(random)
      const { string, lights, warmths } = one
      const cells = string.groups.reduce((sum, { cellsInSeries }) => sum + cellsInSeries, 0)
      const lowV = 0.6 * cells * random()
      const highV = lowV + 0.4 * cells * random()
      const { W, V, heldW, bestBetween } = solved(one)
      const { V: between, W: told } = bestBetween(lowV, highV)
      const exact = stringBestBetweenV(string, lights, warmths, { lowV, highV })
      const [got, want] = [between, exact].map((volts) => stringPowerAtV(string, lights, warmths, volts))
      const what = (): string => JSON.stringify({ ...one, lowV, highV, between, exact, got, want })
      if (!(between >= lowV && between <= highV)) expect.fail(what())
      if (!(Math.abs(got - want) <= 1e-4 * want + 1e-6 * W)) expect.fail(what())
      if (!(Math.abs(told - want) <= 1e-4 * want + 1e-6 * W)) expect.fail(`${told} W told ${what()}`)
      for (let k = 0; k <= 60; k++)
        if (heldW(lowV + ((highV - lowV) * k) / 60) > got * (1 + 1e-4) + 1e-6 * W) expect.fail(`${k} ${what()}`)
      counted.all++
      if (between > lowV && between < highV) counted.inside++
      else counted.edge++
      if (W > 0 && (V < lowV || V > highV) && between > lowV && between < highV) counted.away++
    }
    expect(counted.all).toBe(600)
    expect(counted.inside).toBeGreaterThan(100)
    expect(counted.edge).toBeGreaterThan(100)
    expect(counted.away).toBeGreaterThan(20)
  })

  // Source: by hand, a junction without resistances: V = Voc + a·ln(1 − I/IL), −0.5 V past a diode; highest by a scan.
  it('is that of junctions without resistances, worked by their closed form', () => {
    const CASES = [
      [1000, 1000, 750],
      [1000, 1000, 500],
      [1000, 980, 960, 400],
      [300, 800],
      [60, 50, 40, 30, 20, 10],
    ]
    for (const lights of CASES) {
      const groups = lights.map((_, panel) => ({ panel, cellsInSeries: 10 }))
      const warmths = lights.map(() => 25)
      const { W } = solved({ string: squareString({ groups }), lights, warmths })
      const seriesV = (amps: number): number =>
        lights.reduce((sum, light) => {
          const lightA = (SQUARE_A * light) / 1000
          const openV = SQUARE_OPEN_V + SQUARE_THERMAL_V * Math.log(light / 1000)
          const own = amps < lightA ? 10 * (openV + SQUARE_THERMAL_V * Math.log(1 - amps / lightA)) : -0.5
          return sum + Math.max(own, -0.5)
        }, 0)
      const want = highestW((amps) => amps * seriesV(amps), SQUARE_A)
      expect(Math.abs(W / want - 1), `${lights.join()}: ${W} against ${want}`).toBeLessThan(1e-6)
      expect(Math.abs(stringBest(squareString({ groups }), lights, warmths).W / want - 1)).toBeLessThan(1e-9)
    }
    expect(CASES.length).toBe(5)
  })

  // Source: three worked cases of 10 V sections, by hand: least current of all, or the dark section bypassed.
  it('gives 135 W from 6, 6 and 4.5 A with no bypass or with one, and 117 W from 6, 6 and 3 A, 119.7 W past 0.05 V', () => {
    const CASES = [
      { amps: [6, 6, 4.5], bypassDiodes: 0, bypassV: 0.5, expectedW: 135, within: 0.0045 },
      { amps: [6, 6, 4.5], bypassDiodes: 1, bypassV: 0.5, expectedW: 135, within: 0.0045 },
      { amps: [6, 6, 3], bypassDiodes: 1, bypassV: 0.5, expectedW: 117, within: 0.0016 },
      { amps: [6, 6, 3], bypassDiodes: 1, bypassV: 0.05, expectedW: 119.7, within: 0.0016 },
      // by hand: without a diode the dim section holds the others at 3 A
      { amps: [6, 6, 3], bypassDiodes: 0, bypassV: 0.5, expectedW: 90, within: 0.0052 },
    ]
    for (const { amps, bypassDiodes, bypassV, expectedW, within } of CASES) {
      const groups = amps.map((_, panel) => ({ panel, cellsInSeries: 10, bypassDiodes }))
      const lights = amps.map((each) => (each * 1000) / SQUARE_A)
      const string = squareString({ groups, bypassV })
      const { W } = solved({ string, lights, warmths: amps.map(() => 25) })
      expect(Math.abs(W / expectedW - 1), `${amps.join()} gives ${W}`).toBeLessThan(within)
    }
  })

  it('is exact by another way where a cell is like no real one', () => {
    const random = seeded(7)
    const between = (least: number, most: number): number => least * (most / least) ** random()
    let counted = 0
    for (let i = 0; i < 3000; i++) {
      const cell: CellReference = {
        lightA: between(0.01, 30),
        saturationA: between(1e-30, 1e-3),
        seriesOhm: between(1e-4, 0.5),
        shuntOhm: between(0.05, 1e6),
        modifiedIdealityV: 0.0257 * (0.5 + 2.5 * random()),
        currentCoefficientAPerC: 0,
        bandGapEv: 0.5 + 2 * random(),
        bandGapPerC: -0.0003,
      }
      const { string, lights, warmths } = stringByChance(random)
      const strange: StringModel = { ...string, cell }
      const [W, V] = [new Float64Array(1), new Float64Array(1)]
      const column = (values: number[]): Float64Array[] => values.map((value) => Float64Array.of(value))
      const harvest = { bestW: [W], bestV: [V], effectiveWm2: column(lights), cellC: column(warmths) } as ArrayHarvest
      const strings = prepareStrings([strange])
      fillStrings(strings, harvest, false)
      const best = stringBest(strange, lights, warmths)
      const what = (): string => JSON.stringify({ strange, lights, warmths, best, W: W[0] })
      if (strings.plain[0] === null && !(Math.abs(W[0] - best.W) <= 1e-4 * best.W)) expect.fail(what())
      const heldW = offBest({ strings } as PreparedArray, 0, harvest).atV(0, 0.9 * best.V)
      const wantW = stringPowerAtV(strange, lights, warmths, 0.9 * best.V)
      if (!(Math.abs(heldW - wantW) <= 1e-4 * wantW)) expect.fail(`held ${heldW} ${what()}`)
      if (!isSolvable(cell)) counted++
    }
    expect(counted).toBeGreaterThan(1000)
    expect(counted).toBeLessThan(2500)
  }, 60_000)
})

describe('the best point of a string', () => {
  const watts = (string: StringModel, lights: number[], warmths: number[]): number =>
    solved({ string, lights, warmths }).W

  it('is never above the sum of what its groups would give alone', () => {
    const random = seeded(11)
    let [counted, close] = [0, 0]
    for (let i = 0; i < 4000; i++) {
      const { string, lights, warmths } = stringByChance(random)
      const alone = string.groups.reduce(
        (sum, { panel, cellsInSeries }) =>
          sum +
          cellsInSeries *
            maximumPower(deSoto(string.cell, lights[panel] * (1 - string.soilingFraction), warmths[panel])).W,
        0,
      )
      const W = watts({ ...string, faults: [] }, lights, warmths)
      expect(W).toBeLessThanOrEqual(alone * (1 + 2e-5))
      counted++
      if (W > 0.95 * alone) close++
    }
    expect(counted).toBe(4000)
    expect(close).toBeGreaterThan(500)
  })

  // True at equal warmth, since more light raises a cell's voltage at every current; warmer cells give less.
  it('never falls when one panel gets more light and stays as warm', () => {
    const random = seeded(12)
    let [counted, rose] = [0, 0]
    for (let i = 0; i < 4000; i++) {
      const { string, lights, warmths } = stringByChance(random)
      const brighter = [...lights]
      brighter[Math.floor(random() * lights.length)] *= 1 + 0.5 * random() ** 3
      const [before, after] = [watts(string, lights, warmths), watts(string, brighter, warmths)]
      expect(after).toBeGreaterThanOrEqual(before * (1 - 3e-5))
      counted++
      if (after > before * 1.0001) rose++
    }
    expect(counted).toBe(4000)
    expect(rose).toBeGreaterThan(1500)
  })

  it('does not depend on the order of the groups', () => {
    const random = seeded(13)
    let [counted, several] = [0, 0]
    for (let i = 0; i < 3000; i++) {
      const one = stringByChance(random)
      const groups = one.string.groups.toReversed()
      const faults = (one.string.faults ?? []).map((fault) => ({ ...fault, group: groups.length - 1 - fault.group }))
      const turned = { ...one, string: { ...one.string, groups, faults } }
      const [here, there] = [solved(one), solved(turned)]
      expect(Math.abs(here.W - there.W)).toBeLessThanOrEqual(1e-5 * here.W)
      const volts = 0.9 * here.V
      expect(Math.abs(here.heldW(volts) - there.heldW(volts))).toBeLessThanOrEqual(1e-6 * here.W)
      counted++
      if (groups.length > 2) several++
    }
    expect(counted).toBe(3000)
    expect(several).toBeGreaterThan(1500)
  })

  it('is the same whatever was solved before', () => {
    const random = seeded(14)
    const { string, lights, warmths } = stringByChance(random)
    const first = watts(string, lights, warmths)
    for (let i = 0; i < 50; i++) solved(stringByChance(random))
    expect(watts(string, lights, warmths)).toBe(first)
  })
})
