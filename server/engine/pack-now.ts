import { InputError } from './input-error.ts'
import { stretchIn } from './ocv-table.ts'
import { ohmFactor } from './ohm-factor.ts'
import type { Pack } from './pack.ts'
import { shareAllowed } from './temperature-window.ts'

/** A pack at a charge and a temperature, with what follows from them. */
export interface PackNow {
  /** Usable charge, 0..1. */
  charge: number
  tempC: number
  /** Whole pack, leads and all. [Ohm] */
  ohm: number
  /** One cell of each group. [Ohm] */
  groupOhm: Float64Array
  /** Stretch of the OCV table, and the rested voltage. [V] */
  stretch: number
  ocvV: number
  /** Current limits at this temperature. [A] */
  chargeMaxA: number
  dischargeMaxA: number
}

/** A result to pass to packNow again and again. */
export const newPackNow = (): PackNow => ({
  charge: 0,
  tempC: 0,
  ohm: 0,
  groupOhm: new Float64Array(2),
  stretch: 0,
  ocvV: 0,
  chargeMaxA: 0,
  dischargeMaxA: 0,
})

/** Temperature at which data sheets give a cell. [C] */
export const SHEET_C = 25

/**
 * The pack at a charge and a temperature; resistance and limits hold for the step that starts there.
 *
 * @param charge usable charge, 0..1
 * @param tempC  temperature of the cells. [C]
 * @param out    is filled and returned
 * @throws InputError when charge or temperature is out of range
 */
export function packNow(pack: Pack, charge: number, tempC: number = SHEET_C, out: PackNow = newPackNow()): PackNow {
  if (!(charge >= 0 && charge <= 1)) throw new InputError('out-of-range', 'charge', `${charge} given, 0..1 expected`)
  if (!Number.isFinite(tempC)) throw new InputError('out-of-range', 'tempC', `${tempC} given, a number expected`)
  const { charge: x, V } = pack.ocv
  const i = stretchIn(x, charge)
  out.charge = charge
  out.tempC = tempC
  out.stretch = i
  out.ocvV = V[i] + ((charge - x[i]) * (V[i + 1] - V[i])) / (x[i + 1] - x[i])
  let ohm = pack.leadsOhm
  for (let g = 0; g < pack.groups.length; g++) {
    const group = pack.groups[g]
    const own = group.emptyCharge + charge * (group.fullCharge - group.emptyCharge)
    const factor = pack.ohmFactor === undefined ? 1 : ohmFactor(pack.ohmFactor, own, tempC)
    out.groupOhm[g] = group.ohm * factor
    ohm += group.count * out.groupOhm[g]
  }
  out.ohm = ohm
  out.chargeMaxA = pack.chargeMaxA * (pack.chargeWindow === undefined ? 1 : shareAllowed(pack.chargeWindow, tempC))
  out.dischargeMaxA =
    pack.dischargeMaxA * (pack.dischargeWindow === undefined ? 1 : shareAllowed(pack.dischargeWindow, tempC))
  return out
}
