import { describe, expect, test } from 'vitest'
import { carModel } from '../../server/documents/car-model.ts'
import { carDocument } from '../../server/documents/car.ts'
import type { CarInput } from '../../server/documents/car.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { someCar } from '../support/scenario.ts'

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
