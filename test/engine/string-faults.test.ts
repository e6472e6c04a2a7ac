import { describe, expect, it } from 'vitest'
import { bestOfSubstrings, litSubstrings, stringBest, stringPowerAtV } from '../../server/engine/string.ts'
import { deSoto, voltageAtCurrent } from '../../server/engine/cell.ts'
import { checkString } from '../../server/engine/string-check.ts'
import { type CellFault, cellsUnderDiode, type StringModel, substringsOf } from '../../server/engine/substrings.ts'
import { seeded } from './seeded.ts'
import {
  CELLS,
  faultByChance,
  highestW,
  SQUARE_A,
  solved,
  squareString,
  type StringCase,
  stringByChance,
} from './string-cases.ts'

const weak = (cells: number, lightShare: number, more: Partial<CellFault> = {}): CellFault => ({
  group: 0,
  diode: 0,
  cells,
  kind: 'weak',
  lightShare,
  ...more,
})
const FULL = [1000]
const bothBestW = (string: StringModel): number[] => [
  stringBest(string, FULL, [25]).W,
  solved({ string, lights: FULL, warmths: [25] }).W,
]

describe('a fault in a string', () => {
  // Source: by hand with square cells of 1 V and 6 A: all at the weak cell's current, or its bypass diode's cells lost.
  it('costs the weak cell’s current or the cells under its bypass diode, whichever is less', () => {
    const twenty = (bypassDiodes: number, faults: CellFault[], bypassV = 0.5): StringModel =>
      squareString({ groups: [{ panel: 0, cellsInSeries: 20, bypassDiodes }], faults, bypassV })
    const CASES: { name: string; string: StringModel; expectedW: number }[] = [
      { name: 'sound', string: twenty(5, []), expectedW: 6 * 20 },
      { name: 'half light, one of five diodes', string: twenty(5, [weak(1, 0.5)]), expectedW: 6 * (16 - 0.5) },
      { name: 'half light, one diode for all', string: twenty(1, [weak(1, 0.5)]), expectedW: 3 * 20 },
      { name: 'half light, no diode', string: twenty(0, [weak(1, 0.5)]), expectedW: 3 * 20 },
      { name: '90 % of light, one of five diodes', string: twenty(5, [weak(1, 0.9)]), expectedW: 5.4 * 20 },
      { name: 'open', string: twenty(5, [weak(1, 1, { kind: 'open' })]), expectedW: 6 * (16 - 0.5) },
      { name: 'open, no diode', string: twenty(0, [weak(1, 1, { kind: 'open' })]), expectedW: 0 },
      { name: 'shorted', string: twenty(5, [weak(2, 1, { kind: 'shorted' })]), expectedW: 6 * 18 },
      { name: 'a whole diode shorted', string: twenty(5, [weak(4, 1, { kind: 'shorted' })]), expectedW: 6 * 16 },
      { name: 'all shorted', string: twenty(1, [weak(20, 1, { kind: 'shorted' })]), expectedW: 0 },
      {
        name: 'two faults under two diodes',
        string: twenty(5, [weak(1, 0.5), weak(2, 0.2, { diode: 3 })], 0.05),
        expectedW: 6 * (12 - 2 * 0.05),
      },
      {
        name: 'two faults under one diode',
        string: twenty(5, [weak(1, 0.5, { diode: 2 }), weak(2, 0.2, { diode: 2 })]),
        expectedW: 6 * (16 - 0.5),
      },
    ]
    for (const { name, string, expectedW } of CASES)
      for (const W of bothBestW(string))
        expect(Math.abs(W - expectedW), `${name}: ${W} W`).toBeLessThan(0.0085 * expectedW + 1e-12)
    expect(CASES.length).toBe(12)
  })

  // Source: by hand: 8 cells of 1 V keep 1.0094 V backwards over the weak one; past 3 A its bypass diode takes over.
  it('holds the string at the weak cell’s current until its diode takes over, and the others go on', () => {
    const string = squareString({
      groups: [
        { panel: 0, cellsInSeries: 9, bypassDiodes: 3 },
        { panel: 0, cellsInSeries: 8 },
      ],
      faults: [weak(1, 0.5, { diode: 1 })],
    })
    const one = solved({ string, lights: FULL, warmths: [25] })
    for (const [volts, amps] of [
      [16, 3],
      [14.6, 3],
      [13.4, 6],
      [8, 6],
      [2, 6],
    ]) {
      expect(stringPowerAtV(string, FULL, [25], volts) / volts, `${volts} V`).toBeCloseTo(amps, 2)
      expect(one.heldW(volts) / volts, `${volts} V, fast`).toBeCloseTo(amps, 2)
    }
  })

  it('makes the curve of cells driven backwards: a scan over currents finds no higher hill', () => {
    const [cell] = CELLS
    let counted = 0
    for (const share of [0, 0.1, 0.35, 0.6, 0.8, 0.95])
      for (const bypassDiodes of [1, 2, 4])
        for (const light of [60, 900]) {
          const string: StringModel = {
            ...squareString({ groups: [{ panel: 0, cellsInSeries: 36, bypassDiodes }], faults: [weak(2, share)] }),
            cell,
          }
          const under = cellsUnderDiode(36, bypassDiodes, 0)
          const [sound, dim] = [deSoto(cell, light, 40), deSoto(cell, light * share, 40)]
          const seriesV = (amps: number): number => {
            const one = voltageAtCurrent(sound, amps)
            const hurt = share > 0 ? (under - 2) * one + 2 * voltageAtCurrent(dim, amps) : -Infinity
            return Math.max((36 - under) * one, -0.5 * (bypassDiodes - 1)) + Math.max(hurt, -0.5)
          }
          const scanned = highestW((amps) => amps * seriesV(amps), (cell.lightA * light) / 1000)
          const best = stringBest(string, [light], [40])
          const what = `${share} of ${light} W/m², ${bypassDiodes} diodes: ${best.W} W, scanned ${scanned} W`
          const fast = solved({ string, lights: [light], warmths: [40] })
          expect(Math.abs(best.W - scanned), what).toBeLessThan(1e-8 * scanned + 1e-12)
          expect(Math.abs(fast.W - best.W), what).toBeLessThan(2e-5 * best.W + 1e-12)
          counted++
        }
    expect(counted).toBe(36)
  })

  it('never raises power where cells are weak or open', () => {
    const random = seeded(21)
    let [counted, lost] = [0, 0]
    for (let i = 0; i < 4000; i++) {
      const one = stringByChance(random)
      const group = one.string.groups[Math.floor(random() * one.string.groups.length)]
      const fault = faultByChance(random, { ...group, bypassDiodes: group.bypassDiodes ?? 1 })
      if (fault.kind === 'shorted') continue
      const sound: StringCase = { ...one, string: { ...one.string, faults: [] } }
      const hurt: StringCase = { ...one, string: { ...one.string, faults: [fault] } }
      const [before, after] = [solved(sound), solved(hurt)]
      const what = JSON.stringify(hurt)
      expect(after.W, what).toBeLessThanOrEqual(before.W * (1 + 3e-5))
      expect(after.heldW(0.8 * before.V), what).toBeLessThanOrEqual(before.heldW(0.8 * before.V) * (1 + 1e-5) + 1e-9)
      counted++
      if (after.W < 0.999 * before.W) lost++
    }
    expect(counted).toBeGreaterThan(2500)
    expect(lost).toBeGreaterThan(1500)
  })

  // A short takes a cell's voltage away, which is a gain where the cell gave none: in one light it never is.
  it('never raises power where cells in one light are shorted, and does where they were dark', () => {
    const random = seeded(22)
    let counted = 0
    for (let i = 0; i < 1000; i++) {
      const { string } = stringByChance(random)
      const [light, warmth] = [5 * 260 ** random(), -10 + 100 * random()]
      const groups = string.groups.map((group) => ({ ...group, panel: 0 }))
      const cells = 1 + Math.floor(random() * cellsUnderDiode(groups[0].cellsInSeries, groups[0].bypassDiodes ?? 1, 0))
      const faults = [weak(cells, 1, { kind: 'shorted' })]
      const watts = (some: CellFault[]): number =>
        solved({ string: { ...string, groups, faults: some }, lights: [light], warmths: [warmth] }).W
      expect(watts(faults)).toBeLessThanOrEqual(watts([]) * (1 + 2e-5))
      counted++
    }
    expect(counted).toBe(1000)
    const groups = [0, 1].map((panel) => ({ panel, cellsInSeries: 10 }))
    const dark = squareString({ groups })
    const shorted = squareString({ groups, faults: [weak(10, 1, { group: 1, kind: 'shorted' })] })
    // by hand: 6 A · (10 − 0.5) V past the dark panel's diode, 6 A · 10 V through its shorted cells
    expect(stringBest(dark, [1000, 0], [25, 25]).W).toBeCloseTo(57, 0)
    expect(stringBest(shorted, [1000, 0], [25, 25]).W).toBeCloseTo(60, 0)
  })
})

describe('cells under bypass diodes', () => {
  it('are shared out evenly in whole cells, the first diodes one more', () => {
    expect([0, 1, 2].map((diode) => cellsUnderDiode(38, 3, diode))).toEqual([13, 13, 12])
    expect([0, 1].map((diode) => cellsUnderDiode(12, 2, diode))).toEqual([6, 6])
    expect(cellsUnderDiode(38, 0, 0)).toBe(38)
  })

  it('give way together where they are sound, and alone where one is hurt', () => {
    const string = squareString({
      groups: [
        { panel: 2, cellsInSeries: 38, bypassDiodes: 3 },
        { panel: 0, cellsInSeries: 5, bypassDiodes: 0 },
      ],
      soilingFraction: 0.1,
      faults: [
        weak(2, 0.5, { diode: 1 }),
        weak(1, 1, { diode: 1, kind: 'shorted' }),
        weak(1, 1, { group: 1, kind: 'open' }),
      ],
    })
    expect(substringsOf(string)).toEqual([
      { panel: 2, parts: [{ cells: 25, lightShare: 0.9 }], dropV: 1 },
      {
        panel: 2,
        parts: [
          { cells: 10, lightShare: 0.9 },
          { cells: 2, lightShare: 0.45 },
        ],
        dropV: 0.5,
      },
      {
        panel: 0,
        parts: [
          { cells: 4, lightShare: 0.9 },
          { cells: 1, lightShare: 0 },
        ],
        dropV: Infinity,
      },
    ])
  })

  it('have the light of their panel, less dust and what the fault takes', () => {
    const string = squareString({
      groups: [{ panel: 1, cellsInSeries: 4 }],
      soilingFraction: 0.2,
      faults: [weak(1, 0.5)],
    })
    const [{ parts }] = litSubstrings(string, [0, 500], [0, 25])
    expect(parts.map(({ diode }) => diode.lightA)).toEqual([SQUARE_A * 0.4, SQUARE_A * 0.2])
    expect(bestOfSubstrings([])).toEqual({ W: 0, V: 0, A: 0 })
  })
})

describe('a wrong fault', () => {
  const string = squareString({ groups: [{ panel: 0, cellsInSeries: 7, bypassDiodes: 2 }] })
  const CASES: [string, Partial<StringModel>, RegExp][] = [
    ['group', { faults: [weak(1, 0.5, { group: 1 })] }, /^s\.faults\[0\]\.group: is 1, expected 0 to 0$/],
    ['diode', { faults: [weak(1, 0.5, { diode: 2 })] }, /^s\.faults\[0\]\.diode: is 2, expected 0 to 1$/],
    ['cells', { faults: [weak(4, 0.5, { diode: 1 })] }, /^s\.faults\[0\]\.cells: is 4, expected 1 to 3$/],
    ['cells taken', { faults: [weak(3, 0.5), weak(2, 0.1)] }, /^s\.faults\[1\]\.cells: is 2, expected 1 to 1$/],
    ['part of a cell', { faults: [weak(0.5, 0.5)] }, /^s\.faults\[0\]\.cells: is 0.5, expected a whole number/],
    ['light', { faults: [weak(1, 1.5)] }, /^s\.faults\[0\]\.lightShare: is 1.5, expected 0 to 1$/],
    [
      'rows',
      { faults: [weak(1, 0.5)], cellsInParallel: 2 },
      /^s\.cellsInParallel: is 2, expected 1 where the string has faults$/,
    ],
    ['diodes', { groups: [{ panel: 0, cellsInSeries: 2, bypassDiodes: 3 }] }, /bypassDiodes: is 3, expected 0 to 2$/],
  ]

  it('is refused with the field, its value and what was expected', () => {
    for (const [name, more, message] of CASES)
      expect(() => checkString('s', { ...string, ...more }, 1), name).toThrow(message)
    expect(CASES.length).toBe(8)
    expect(() => checkString('s', { ...string, faults: [weak(4, 0), weak(3, 1, { diode: 1 })] }, 1)).not.toThrow()
  })
})
