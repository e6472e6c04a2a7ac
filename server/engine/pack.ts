import { cellGroups } from './cell-groups.ts'
import type { CellGroup, WeakCell } from './cell-groups.ts'
import { InputError } from './input-error.ts'
import { checkOcv } from './ocv-table.ts'
import type { OcvTable } from './ocv-table.ts'
import { checkFactors } from './ohm-factor.ts'
import type { FactorTable } from './ohm-factor.ts'
import { checkHeat } from './pack-heat.ts'
import type { PackHeat } from './pack-heat.ts'
import { checkWindow } from './temperature-window.ts'
import type { TemperatureWindow } from './temperature-window.ts'

/** The pack as its terminals show it when all cells are alike, and how it departs from that. */
export interface PackInput {
  /** Charge of the cells between empty and full, coulombs (ampere-hours x 3600). */
  capacityC: number
  /** Voltage of the whole pack by the charge of its cells. */
  ocv: OcvTable
  /** Cells and leads, at a factor of 1. */
  resistanceOhm: number
  /** Part of resistanceOhm that neither charge nor temperature changes; 0 where left out. */
  leadsOhm?: number
  /** Resistance of the cells by charge and temperature; 1 everywhere where left out. */
  ohmFactor?: FactorTable
  chargeMaxV: number
  /** A rested cell at its share of this is empty, even where the table goes lower. */
  dischargeMinV: number
  chargeMaxA: number
  dischargeMaxA: number
  /** Cell temperatures at which it may charge, and discharge; any where left out. */
  chargeWindow?: TemperatureWindow
  dischargeWindow?: TemperatureWindow
  /** Share of the charging current that stays as charge, above 0 up to 1. */
  coulombicEfficiency: number
  /** The group that departs most from the others; all alike where left out. */
  weakest?: WeakCell
  /** As warm as the air where left out. */
  heat?: PackHeat
}

/**
 * A checked pack on the scale of its usable charge: 0 where the first cell is empty, 1 where the first
 * is full. `ocv`, `capacityC` and `belowJ` are over that scale.
 */
export interface Pack extends PackInput {
  leadsOhm: number
  /** Energy stored below each point of the OCV table. [J] */
  belowJ: Float64Array
  /** One group where all cells are alike; else the usual cells and the weakest. */
  groups: CellGroup[]
  /** Limits of one cell; of the whole pack where it is one group. [V] */
  cellMaxV: number
  cellMinV: number
  /** Whether the weakest group is the first to be empty, and the first to be full. */
  weakestEmptiesFirst: boolean
  weakestFillsFirst: boolean
}

/**
 * A pack that the step functions can rely on.
 *
 * @throws InputError naming the field when a number is missing or out of range
 */
export function preparePack(input: PackInput): Pack {
  checkNumbers(input)
  checkOcv(input.ocv)
  if (input.ohmFactor !== undefined) checkFactors('pack.ohmFactor', input.ohmFactor)
  if (input.chargeWindow !== undefined) checkWindow('pack.chargeWindow', input.chargeWindow)
  if (input.dischargeWindow !== undefined) checkWindow('pack.dischargeWindow', input.dischargeWindow)
  if (input.heat !== undefined) checkHeat('pack.heat', input.heat)
  const leadsOhm = input.leadsOhm ?? 0
  const { usable, ocv, ...grouped } = cellGroups({ ...input, leadsOhm })
  const capacityC = input.capacityC * usable
  return { ...input, leadsOhm, capacityC, ocv, belowJ: energyBelow(ocv, capacityC), ...grouped }
}

function checkNumbers(pack: PackInput): void {
  for (const name of ['capacityC', 'resistanceOhm', 'chargeMaxV', 'chargeMaxA', 'dischargeMaxA'] as const) {
    requireRange(name, pack[name], (value) => value > 0, 'a number above 0')
  }
  const { leadsOhm = 0, chargeMaxV, resistanceOhm } = pack
  const isLead = (value: number): boolean => value >= 0 && value <= resistanceOhm
  requireRange('leadsOhm', leadsOhm, isLead, 'at least 0 and no more than resistanceOhm')
  const isShare = (value: number): boolean => value > 0 && value <= 1
  requireRange('coulombicEfficiency', pack.coulombicEfficiency, isShare, 'above 0 up to 1')
  const isFloor = (value: number): boolean => value >= 0 && value < chargeMaxV
  requireRange('dischargeMinV', pack.dischargeMinV, isFloor, 'at least 0 and below chargeMaxV')
}

function requireRange(name: string, value: number, isGood: (value: number) => boolean, wanted: string): void {
  if (!Number.isFinite(value) || !isGood(value)) {
    throw new InputError('out-of-range', `pack.${name}`, `${value} given, ${wanted} expected`)
  }
}

function energyBelow({ charge, V }: OcvTable, capacityC: number): Float64Array {
  const below = new Float64Array(charge.length)
  for (let i = 1; i < charge.length; i++) {
    below[i] = below[i - 1] + (capacityC * (charge[i] - charge[i - 1]) * (V[i] + V[i - 1])) / 2
  }
  return below
}
