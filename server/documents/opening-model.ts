import { openCircuitV, storedJ } from '../engine/battery.ts'
import type { Pack } from '../engine/battery.ts'
import { InputError } from '../engine/input-error.ts'
import type { Warmth } from '../engine/pack-heat.ts'
import { chargeAtRest, RESTED_S } from '../engine/rest-voltage.ts'
import type { Measured } from './race.ts'

/** How far a voltmeter may be off that nobody described. Ours; no source. [%] */
const USUAL_METER_PCT = 0.5

/** From here on the range is worth a warning. [points of charge] */
const WIDE_PCT = 5

/**
 * The charge that was measured at an opening, and what is to be said about it; null where none was.
 *
 * @param field  where it stands, for example `race.days[1]`
 * @throws InputError when a rested voltage lies outside the pack's table
 */
export function measuredCharge(
  pack: Pack,
  measured: Measured,
  field: string,
): { charge: number; notes: string[] } | null {
  const { openingPct, openingRestV } = measured
  if (openingPct !== undefined) return { charge: openingPct / 100, notes: [] }
  if (openingRestV === undefined) return null
  const meterPct = measured.openingMeterPct ?? USUAL_METER_PCT
  const rested = chargeAtRest(pack, openingRestV, (openingRestV * meterPct) / 100)
  if (rested === null)
    throw new InputError(
      'out-of-range',
      `${field}.openingRestV`,
      `${openingRestV} given; expected ${openCircuitV(pack, 0).toFixed(2)} to ${openCircuitV(pack, 1).toFixed(2)} V, the pack’s rested voltages from empty to full`,
    )
  const notes = [chargeNote(pack, openingRestV, meterPct, rested)]
  const { openingRestMin } = measured
  if (openingRestMin !== undefined && openingRestMin * 60 < RESTED_S)
    notes.push(
      `The pack had rested ${openingRestMin} min when its voltage was read: before ${RESTED_S / 60} min it still drifts, and the charge may be some per cent off.`,
    )
  return { charge: rested.charge, notes }
}

function chargeNote(
  pack: Pack,
  volts: number,
  meterPct: number,
  { charge, low, high }: { charge: number; low: number; high: number },
): string {
  const pct = (share: number): string => (share * 100).toFixed(1)
  const eitherWh = (storedJ(pack, high) - storedJ(pack, low)) / 2 / 3600
  const isFlat = (high - low) * 100 > 2 * WIDE_PCT
  return (
    `Opening charge ${pct(charge)} % from ${volts} V at rest; a meter within ±${meterPct} % makes it ` +
    `${pct(low)} to ${pct(high)} % (±${Math.round(eitherWh / 10) * 10} Wh).` +
    (isFlat ? ' The voltage is flat there and says little: a counted charge may be better.' : '')
  )
}

/** The pack's temperature where it was measured at an opening. */
export const measuredWarmth = ({ openingPackC }: Measured, atMs: number): Warmth | undefined =>
  openingPackC === undefined ? undefined : { packC: openingPackC, airC: openingPackC, atMs }
