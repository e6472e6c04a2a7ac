import { type HeatLoss, heatLossWm2K } from './cell-temperature.ts'

/** How panels of one kind warm and cool along the steps; shared by all panels that lose heat alike. */
export interface WarmthAlong {
  /** Kelvin over the air at which a panel settles, per W/m² of light. */
  heating: Float64Array
  /** Share of the distance to there that is left at the end of the step; null where nothing is remembered. */
  left: Float64Array | null
  /** Mean of that share over the step. */
  meanLeft: Float64Array | null
}

/**
 * What a kind of panel makes of the air along the steps, before its light is known.
 *
 * @param airSpeedMps  speed of the air over the panels. [m/s] (steps)
 * @param durationS    length of each step; left out, every step is steady. [s] (steps)
 */
export function warmthAlong(loss: HeatLoss, airSpeedMps: Float64Array, durationS?: Float64Array): WarmthAlong {
  const count = airSpeedMps.length
  const heating = new Float64Array(count)
  const isSteady = durationS === undefined || loss.capacityJm2K === 0
  const left = isSteady ? null : new Float64Array(count)
  const meanLeft = isSteady ? null : new Float64Array(count)
  let lastAirSpeed = Number.NaN
  let lossWm2K = 0
  for (let i = 0; i < count; i++) {
    if (airSpeedMps[i] !== lastAirSpeed) {
      lastAirSpeed = airSpeedMps[i]
      lossWm2K = heatLossWm2K(loss, lastAirSpeed)
    }
    heating[i] = loss.heatFraction / lossWm2K
    if (durationS === undefined || left === null || meanLeft === null) continue
    const gone = (durationS[i] * lossWm2K) / loss.capacityJm2K
    const cooled = -Math.expm1(-gone)
    left[i] = 1 - cooled
    meanLeft[i] = gone > 0 ? cooled / gone : 1
  }
  return { heating, left, meanLeft }
}

/**
 * Mean cell temperature over each step: C·dT/dt = heat − U·(T − air), solved exactly with light, air and U of the step.
 *
 * Each step starts where the one before ended, the first at the temperature at which it would settle: in the dark that
 * of the air, in the light that of a car that stood there before. The string's power is near enough linear in
 * temperature that the mean gives the step's energy.
 *
 * @param warmth    of the panel's kind, `warmthAlong`
 * @param airC      air over the panels. [°C] (steps)
 * @param planeWm2  light on the panel. [W/m²] (steps)
 * @param meanC     overwritten. [°C] (steps)
 * @returns temperature at the end of the last step; NaN without steps. [°C]
 * @source one lumped heat capacity, worked by hand: T = S + (T0 − S)·e^(−U·t/C), S the settled temperature
 */
export function cellWarmth(
  warmth: WarmthAlong,
  airC: Float64Array,
  planeWm2: Float64Array,
  meanC: Float64Array,
): number {
  const { heating, left, meanLeft } = warmth
  let nowC = Number.NaN
  for (let i = 0; i < meanC.length; i++) {
    const settledC = airC[i] + planeWm2[i] * heating[i]
    const off = left === null || i === 0 ? 0 : nowC - settledC
    meanC[i] = meanLeft === null ? settledC : settledC + off * meanLeft[i]
    nowC = left === null ? settledC : settledC + off * left[i]
  }
  return nowC
}
