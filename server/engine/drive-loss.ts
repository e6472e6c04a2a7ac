import { InputError } from './input-error.ts'

/** What motor and electronics lose, by force at the wheels and speed. */
export type DriveLosses = LossTerms | LossTable

/** standing + friction·v + eddy·v² + copper·F²: everything at the wheels. */
export interface LossTerms {
  kind: 'terms'
  /** Electronics, at rest already. */
  standingW: number
  /** Losses that grow with speed: hysteresis, bearings. [N] */
  frictionN: number
  /** Losses that grow with its square: eddy currents, air. [N·s/m] */
  eddyNsM: number
  /** Copper losses over the square of the force. [W/N²] */
  copperWN2: number
}

/** Losses measured at forces and speeds. */
export interface LossTable {
  kind: 'table'
  /** Ascending, above 0. [N] (rows) */
  forceN: Float64Array
  /** Ascending, above 0. [m/s] (columns) */
  speedMps: Float64Array
  /** At least 0, row by row. [W] */
  lossW: Float64Array
}

/** @throws InputError naming the field when a number is missing or out of range */
export function prepareLosses(losses: DriveLosses): DriveLosses {
  if (losses.kind === 'table') return prepareTable(losses)
  for (const name of ['standingW', 'frictionN', 'eddyNsM', 'copperWN2'] as const)
    if (!(losses[name] >= 0 && losses[name] < Infinity))
      throw new InputError(
        'out-of-range',
        `drive.losses.${name}`,
        `${losses[name]} given, a number of at least 0 expected`,
      )
  return { ...losses }
}

function prepareTable(table: LossTable): LossTable {
  const { forceN, speedMps, lossW } = table
  for (const [name, axis] of [
    ['forceN', forceN],
    ['speedMps', speedMps],
  ] as const) {
    const wrong = axis.findIndex((value, i) => !(value > (i === 0 ? 0 : axis[i - 1]) && value < Infinity))
    if (axis.length < 2 || wrong >= 0)
      throw new InputError(
        'bad-table',
        `drive.losses.${name}`,
        `${axis.join(', ')} given, two or more ascending numbers above 0 expected`,
      )
  }
  const wrong = lossW.findIndex((value) => !(value >= 0 && value < Infinity))
  if (lossW.length !== forceN.length * speedMps.length || wrong >= 0)
    throw new InputError(
      'bad-table',
      'drive.losses.lossW',
      `${lossW.length} values given, ${forceN.length} × ${speedMps.length} of at least 0 expected`,
    )
  return { ...table }
}

/**
 * What the drive loses at a power and a speed.
 *
 * The table is taken as watts of loss, linear between its points; efficiency is never interpolated, for it
 * collapses towards no load. Below the table its nearest loss holds; above it the loss grows in proportion.
 *
 * @param wheelW   at the wheels, the same for driving and braking. [W]
 * @param speedMps at least 0. [m/s]
 * @returns [W]
 * @source loss = k0 + k1·ω + k2·ω² + 3·I²·R, I ∝ torque (common practice, from memory)
 */
export function driveLossW(losses: DriveLosses, wheelW: number, speedMps: number): number {
  const forceN = speedMps > 0 ? Math.abs(wheelW) / speedMps : 0
  if (losses.kind === 'table') return tableLossW(losses, forceN, speedMps)
  const { standingW, frictionN, eddyNsM, copperWN2 } = losses
  return standingW + (frictionN + eddyNsM * speedMps) * speedMps + copperWN2 * forceN * forceN
}

function tableLossW(table: LossTable, forceN: number, speedMps: number): number {
  const rows = table.forceN
  const columns = table.speedMps
  const mostN = rows[rows.length - 1]
  const mostMps = columns[columns.length - 1]
  const beyond = Math.max(forceN / mostN, 1) * Math.max(speedMps / mostMps, 1)
  const r = Math.min(segment(rows, forceN), rows.length - 2)
  const c = Math.min(segment(columns, speedMps), columns.length - 2)
  const y = shareOf(rows, r, forceN)
  const x = shareOf(columns, c, speedMps)
  const at = r * columns.length + c
  const { lossW } = table
  const low = lossW[at] + x * (lossW[at + 1] - lossW[at])
  const next = at + columns.length
  const high = lossW[next] + x * (lossW[next + 1] - lossW[next])
  return beyond * (low + y * (high - low))
}

/** Index of the last value that is not above `at`, 0 at least. */
function segment(axis: Float64Array, at: number): number {
  let i = 0
  while (i < axis.length - 1 && axis[i + 1] <= at) i++
  return i
}

const shareOf = (axis: Float64Array, i: number, at: number): number =>
  Math.min(Math.max((at - axis[i]) / (axis[i + 1] - axis[i]), 0), 1)

/** How copper's resistance grows with temperature, from 20 °C. [1/°C] @source IEC 60028:1925, annealed copper */
const COPPER_PER_C = 0.00393

/**
 * Resistance of a copper winding at a temperature.
 *
 * @param ohmAt20C at 20 °C. [Ω]
 * @param atC      of the winding. [°C]
 * @returns [Ω]
 */
export const copperOhm = (ohmAt20C: number, atC: number): number => ohmAt20C * (1 + COPPER_PER_C * (atC - 20))
