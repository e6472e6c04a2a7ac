import { chargeAtV } from './ocv-table.ts'
import type { OcvTable } from './ocv-table.ts'
import type { Pack } from './pack.ts'

/** Rested for so long a pack shows its open-circuit voltage. [S] Common practice, no source. */
export const RESTED_S = 1800

/** The usable charge that a rested voltage stands for, and within which it lies by the meter's error, 0..1. */
export interface RestedCharge {
  charge: number
  low: number
  high: number
}

/**
 * Usable charge of a rested pack from the voltage at its terminals.
 *
 * The pack's table is the sum of its cells, the weakest as it is. Where the voltage is flat any charge of the flat part
 * fits: its middle is taken, its ends belong to the range.
 *
 * @param volts   at the terminals, no current for half an hour or more. [V]
 * @param errorV  how far the meter may be off, either way. [V]
 * @returns null where the voltage lies outside the table
 */
export function chargeAtRest(pack: Pack, volts: number, errorV: number): RestedCharge | null {
  const { V } = pack.ocv
  if (!(volts >= V[0] && volts <= V[V.length - 1])) return null
  return {
    charge: (chargeAtV(pack.ocv, volts) + highestAt(pack.ocv, volts)) / 2,
    low: chargeAtV(pack.ocv, volts - errorV),
    high: highestAt(pack.ocv, volts + errorV),
  }
}

/** The most charge at which the voltage is not above `volts`. */
function highestAt({ charge, V }: OcvTable, volts: number): number {
  if (volts < V[0]) return 0
  let i = V.length - 1
  while (V[i] > volts) i--
  if (i === V.length - 1) return 1
  return charge[i] + ((volts - V[i]) * (charge[i + 1] - charge[i])) / (V[i + 1] - V[i])
}
