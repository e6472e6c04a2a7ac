import { describe, expect, test } from 'vitest'
import { carModel } from '../../server/documents/car-model.ts'
import { carDocument } from '../../server/documents/car.ts'
import type { CarInput } from '../../server/documents/car.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { someCar } from '../support/scenario.ts'
import { oneDay } from '../support/some-budget.ts'

type StringInput = CarInput['strings'][number]

const carWith = (more: Partial<StringInput>): CarInput => {
  const car = someCar()
  car.strings[0] = { ...car.strings[0], ...more }
  return car
}
const stringOf = (more: Partial<StringInput>) =>
  carModel(carDocument.parse(carWith(more)), { groundAlbedo: 0.2, skyModel: 'perez' }).array.model.strings[0]

describe('a string of the car', () => {
  test('has one bypass diode a panel and no faults where nothing is said', () => {
    expect(stringOf({})).toMatchObject({
      groups: [{ panel: 0, cellsInSeries: 120, bypassDiodes: 1 }],
      faults: [],
      bypassV: 0.5,
    })
  })

  test('carries diodes and faults over, counted from 0 and in shares', () => {
    const cells = [
      { panel: 'deck', inSeries: 60, bypassDiodes: 4 },
      { panel: 'nose', inSeries: 50, bypassDiodes: 0 },
    ]
    const { groups, faults } = stringOf({
      cells,
      faults: [
        { kind: 'weak', panel: 'deck', underDiode: 3, cells: 2, lightPct: 40 },
        { kind: 'shorted', panel: 'nose' },
        { kind: 'open', panel: 'deck' },
      ],
    })
    expect(groups.map(({ panel, bypassDiodes }) => [panel, bypassDiodes])).toEqual([
      [0, 4],
      [1, 0],
    ])
    expect(faults).toEqual([
      { group: 0, diode: 2, cells: 2, kind: 'weak', lightShare: 0.4 },
      { group: 1, diode: 0, cells: 1, kind: 'shorted', lightShare: 0 },
      { group: 0, diode: 0, cells: 1, kind: 'open', lightShare: 0 },
    ])
  })

  const deck = { panel: 'deck', inSeries: 7, bypassDiodes: 2 }
  const weak = { kind: 'weak', panel: 'deck', lightPct: 50 } as const
  test.each<[string, Partial<StringInput>, string, string]>([
    [
      'more diodes than cells',
      { cells: [{ ...deck, bypassDiodes: 8 }] },
      'cells[0].bypassDiodes',
      'at most 7, the cells',
    ],
    [
      'a panel without its cells',
      { faults: [{ ...weak, panel: 'nose' }] },
      'faults[0].panel',
      'this string\'s panels: "deck"',
    ],
    ['a panel with two groups', { cells: [deck, deck], faults: [weak] }, 'faults[0].panel', 'carries one group'],
    [
      'a diode too many',
      { cells: [deck], faults: [{ ...weak, underDiode: 3 }] },
      'faults[0].underDiode',
      '1 to 2, the bypass',
    ],
    [
      'more cells than there are',
      { cells: [deck], faults: [{ ...weak, cells: 5 }] },
      'faults[0].cells',
      'at most 4, the cells',
    ],
    [
      'cells that another fault holds',
      {
        cells: [deck],
        faults: [
          { ...weak, underDiode: 2 },
          { ...weak, underDiode: 2, cells: 3 },
        ],
      },
      'faults[1].cells',
      'at most 2, the cells',
    ],
    ['a fault among rows', { inParallel: 2, faults: [weak] }, 'inParallel', '1 where the string has faults'],
    ['a light above all', { faults: [{ ...weak, lightPct: 101 }] }, 'faults[0].lightPct', 'at most 100'],
  ])('with %s is refused by name', (_, more, field, detail) => {
    const problems = checkDocument(carDocument, carWith(more)).problems ?? []
    expect(problems).toHaveLength(1)
    expect(problems[0].field).toBe(`strings[0].${field}`)
    expect(problems[0].detail).toContain(detail)
  })

  test('with a fault of no known kind is refused', () => {
    const car: unknown = carWith({ faults: [{ ...weak, kind: 'broken' as 'open' }] })
    expect(checkDocument(carDocument, car).problems?.map(({ field }) => field)).toEqual(['strings[0].faults[0].kind'])
  })
})

describe('a fault in the day’s budget', () => {
  const day = (more: Partial<StringInput>) =>
    oneDay((r) => {
      const cells = [{ panel: 'deck', inSeries: 120, bypassDiodes: 6 }]
      r.car.strings[0] = { ...r.car.strings[0], cells, ...more }
    })
  /** What the strings could give: what came in and what was denied. */
  const bestWh = (ledger: ReturnType<typeof day>['ledger']): number =>
    ledger.denied.reduce((sum, { wh }) => sum + wh, ledger.cameInWh)
  const soundWh = bestWh(day({}).ledger)
  const of = (more: Partial<StringInput>): number => bestWh(day(more).ledger) / soundWh

  // By hand: 220 cells come in; 20 of them under the diode that takes over, and its drop of 0.5 V in about 0.55 V a cell.
  test('takes what lies under its bypass diode, and only the weak cells’ share where that is less', () => {
    const lost = (20 + 0.5 / 0.55) / 220
    expect(1 - of({ faults: [{ kind: 'open', panel: 'deck' }] })).toBeCloseTo(lost, 2)
    expect(1 - of({ faults: [{ kind: 'weak', panel: 'deck', lightPct: 20 }] })).toBeCloseTo(lost, 2)
    const little = 1 - of({ faults: [{ kind: 'weak', panel: 'deck', lightPct: 90 }] })
    expect(little).toBeGreaterThan(1 / 220)
    expect(little).toBeLessThan((0.1 * 120) / 220)
    expect(1 - of({ faults: [{ kind: 'shorted', panel: 'deck', cells: 2 }] })).toBeCloseTo(2 / 220, 2)
  })

  test('takes more with fewer diodes, and leaves a ledger that closes', () => {
    const faults: StringInput['faults'] = [{ kind: 'open', panel: 'deck' }]
    const with_ = (bypassDiodes: number) => day({ cells: [{ panel: 'deck', inSeries: 120, bypassDiodes }], faults })
    const ledgers = [6, 3, 2].map((diodes) => with_(diodes).ledger)
    for (let k = 1; k < ledgers.length; k++) expect(bestWh(ledgers[k])).toBeLessThan(0.95 * bestWh(ledgers[k - 1]))
    for (const { openingWh, cameInWh, wentOutWh, closingWh } of ledgers)
      expect(openingWh + cameInWh - wentOutWh - closingWh).toBeCloseTo(0, 3)
  })
})
