import { InputError } from './input-error.ts'
import { chargeAtV, voltsAt } from './ocv-table.ts'
import type { OcvTable } from './ocv-table.ts'
import type { PackInput } from './pack.ts'

/** How the weakest of the groups in series departs from the others. */
export interface WeakCell {
  /** Groups in series, the weakest among them. */
  inSeries: number
  /** What its capacity lacks of the others', 0 to below 1. */
  capacityDeficit: number
  /** How far its charge lies below the others' when they are full, as a share of their capacity; negative: above. */
  chargeOffset: number
  /** What its resistance has more than the others', as a share. */
  extraResistance: number
}

/** Cells of a pack that behave alike. */
export interface CellGroup {
  /** How many of them are in series; 1 where the group stands for the whole pack. */
  count: number
  /** Rested voltage of one over the pack's usable charge, at the points of the pack's table. */
  ocv: OcvTable
  /** Resistance of one at a factor of 1. [Ohm] */
  ohm: number
  /** Its own charge where the pack is empty, and where it is full; in a straight line between. */
  emptyCharge: number
  fullCharge: number
}

/** A pack that its weakest group leaves with less than this of its charge is taken for a mistake. */
const LEAST_USABLE = 0.1

/** Points of the table nearer than this are one. */
const SAME_POINT = 1e-9

interface Grouped {
  /** Share of the cells' charge that is usable. */
  usable: number
  ocv: OcvTable
  groups: CellGroup[]
  cellMaxV: number
  cellMinV: number
  weakestEmptiesFirst: boolean
  weakestFillsFirst: boolean
}

/**
 * A pack as groups of cells on the scale of its usable charge.
 *
 * All carry the same current, so their charges move in step: with the usual cells at charge z, the weakest holds
 * 1 − (1 − z + offset)/(1 − deficit) of its own. The pack is empty when the first of them is (at its table's start or
 * at its share of dischargeMinV, whichever comes first) and full when the first of them is. Its voltage is the sum
 * of all.
 *
 * @throws InputError when too little stays usable
 */
export function cellGroups(input: PackInput & { leadsOhm: number }): Grouped {
  const { ocv, weakest, dischargeMinV } = input
  if (weakest !== undefined) checkWeakest(weakest)
  const inSeries = weakest?.inSeries ?? 1
  const cell = { charge: ocv.charge, V: ocv.V.map((v) => v / inSeries) }
  const floor = chargeAtV(cell, dischargeMinV / inSeries)
  const usualAt = (own: number): number =>
    weakest === undefined ? own : 1 + weakest.chargeOffset - (1 - own) * (1 - weakest.capacityDeficit)
  const low = Math.max(floor, usualAt(floor))
  const high = Math.min(1, usualAt(1))
  if (!(high - low >= LEAST_USABLE))
    throw new InputError(
      'out-of-range',
      'pack',
      `${((high - low) * 100).toFixed(1)} % of the charge usable between floor and weakest cell; at least ${LEAST_USABLE * 100} % expected`,
    )
  const usable = high - low
  const points = pointsBetween(low, high, [...cell.charge, ...Array.from(cell.charge, usualAt)])
  const charge = Float64Array.from(points, (z) => (z - low) / usable)
  const cellOhm = (input.resistanceOhm - input.leadsOhm) / inSeries
  const group = (own: (z: number) => number, count: number, ohm: number): CellGroup => ({
    count,
    ocv: { charge, V: Float64Array.from(points, (z) => voltsAt(cell, Math.min(Math.max(own(z), 0), 1))) },
    ohm,
    emptyCharge: own(low),
    fullCharge: own(high),
  })
  const groups = [group((z) => z, Math.max(inSeries - 1, 1), cellOhm)]
  if (weakest !== undefined)
    groups.push(group((z) => ownCharge(weakest, z), 1, cellOhm * (1 + weakest.extraResistance)))
  return {
    usable,
    ocv: { charge, V: charge.map((_, i) => groups.reduce((sum, g) => sum + g.count * g.ocv.V[i], 0)) },
    groups,
    cellMaxV: input.chargeMaxV / inSeries,
    cellMinV: dischargeMinV / inSeries,
    weakestEmptiesFirst: usualAt(floor) > floor,
    weakestFillsFirst: usualAt(1) < 1,
  }
}

/** Charge of the weakest group with the usual cells at z. */
const ownCharge = ({ chargeOffset, capacityDeficit }: WeakCell, z: number): number =>
  1 - (1 - z + chargeOffset) / (1 - capacityDeficit)

function checkWeakest(weakest: WeakCell): void {
  const check = (name: keyof WeakCell, isGood: boolean, wanted: string): void => {
    if (!isGood)
      throw new InputError('out-of-range', `pack.weakest.${name}`, `${weakest[name]} given, ${wanted} expected`)
  }
  check('inSeries', Number.isInteger(weakest.inSeries) && weakest.inSeries >= 2, 'a whole number from 2')
  check('capacityDeficit', weakest.capacityDeficit >= 0 && weakest.capacityDeficit < 1, '0 to below 1')
  check('chargeOffset', Math.abs(weakest.chargeOffset) < 1, 'between -1 and 1')
  check('extraResistance', weakest.extraResistance >= 0 && Number.isFinite(weakest.extraResistance), 'at least 0')
}

/** Ascending points from low to high, those given between them, none twice. */
function pointsBetween(low: number, high: number, given: number[]): number[] {
  const points = [low]
  for (const z of [...given].sort((a, b) => a - b))
    if (z > points[points.length - 1] + SAME_POINT && z < high - SAME_POINT) points.push(z)
  return [...points, high]
}
