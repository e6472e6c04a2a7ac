/** What may differ from the forecast. */
export const CAUSES = ['sun', 'wind', 'road', 'trackers', 'opening'] as const
export type Cause = (typeof CAUSES)[number]

/** Standard deviations of what may differ; 0 for what is taken as known. */
export interface Spreads {
  /** Of a factor on the sun's power that holds all day: haze, a forecast that is off. */
  sunDay: number
  /** Of a factor that wanders: clouds; at the forecast's own lead time. */
  sunWander: number
  /** Over which it forgets, in time and along the road. [S], [M] */
  wanderS: number
  wanderM: number
  /** Of the headwind, all day. [Mps] */
  headwindMps: number
  /** Of a factor on what road and air take. */
  roadLoad: number
  /** Of a factor on what the trackers let through. */
  trackers: number
  /** Of the energy in the pack at the start. [J] */
  openingJ: number
}

/**
 * Spread of a sky forecast by how far it looks ahead: grows with the root of the lead time and levels off.
 *
 * Common practice, no source: clear-sky indices of hourly forecasts miss by some 10 % an hour ahead and by 25 to 30 %
 * a day ahead under broken cloud, by far less under a clear sky.
 *
 * @param leadS      from when the forecast was issued. [S]
 * @param clearness  share of the clear sky's light that is forecast, 0..1
 */
export function skySpread(leadS: number, clearness: number): number {
  const hours = Math.max(leadS, 0) / 3600
  const most = 0.06 + 0.24 * Math.min(Math.max(4 * clearness * (1 - clearness), 0), 1)
  return most * Math.sqrt(1 - Math.exp(-(hours + 0.5) / 8))
}
