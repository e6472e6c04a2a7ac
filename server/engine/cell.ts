/** Single-diode values of one cell (or of cells in series taken as one) at 1000 W/m² and 25 °C. */
export interface CellReference {
  lightA: number
  saturationA: number
  seriesOhm: number
  shuntOhm: number
  /** Ideality × cells × kT/q. */
  modifiedIdealityV: number
  /** Change of the light current per kelvin. [A/K] */
  currentCoefficientAPerC: number
  bandGapEv: number
  /** Relative change of the band gap per kelvin, usually negative. [1/K] */
  bandGapPerC: number
}

/** The same values at one light and temperature. */
export interface Diode {
  lightA: number
  saturationA: number
  seriesOhm: number
  shuntOhm: number
  /** Modified ideality. [V] */
  thermalV: number
}

/** A point on a current–voltage curve. */
export interface OperatingPoint {
  W: number
  V: number
  A: number
}

/** Boltzmann constant over the elementary charge: CODATA 2018. [eV/K] */
export const BOLTZMANN_EV_PER_K = 8.617333262e-5
export const ZERO_C_K = 273.15
export const REFERENCE_K = 25 + ZERO_C_K
export const REFERENCE_WM2 = 1000
/** Newton's steps stop when they move the diode's voltage by less than this share of its scale. */
const CLOSE_ENOUGH = 1e-13
const MOST_STEPS = 100

/**
 * Single-diode values of a cell at a light and temperature.
 *
 * De Soto's five parameters; published for 100–1100 W/m², used here at all lights. No light gives no light current and
 * an infinite shunt.
 *
 * @param reference      the cell at 1000 W/m², 25 °C
 * @param irradianceWm2  light that reaches the cells, ≥ 0. [W/m²]
 * @param cellC          cell temperature. [°C]
 * @source De Soto, Klein & Beckman 2006, Improvement and validation of a model for photovoltaic array performance,
 *   eq. 8–13
 */
export function deSoto(reference: CellReference, irradianceWm2: number, cellC: number): Diode {
  const S = Math.max(irradianceWm2, 0) / REFERENCE_WM2
  const T = cellC + ZERO_C_K
  const ratio = T / REFERENCE_K
  const Eg0 = reference.bandGapEv
  const Eg = Eg0 * (1 + reference.bandGapPerC * (T - REFERENCE_K))
  return {
    lightA: S * (reference.lightA + reference.currentCoefficientAPerC * (T - REFERENCE_K)),
    saturationA: reference.saturationA * ratio ** 3 * Math.exp((Eg0 / REFERENCE_K - Eg / T) / BOLTZMANN_EV_PER_K),
    seriesOhm: reference.seriesOhm,
    shuntOhm: reference.shuntOhm / S,
    thermalV: reference.modifiedIdealityV * ratio,
  }
}

/** Current at a voltage across the junction, before the series resistance (Bishop's parameter). [A] */
export const junctionCurrentA = (d: Diode, junctionV: number): number =>
  d.lightA - d.saturationA * Math.expm1(junctionV / d.thermalV) - junctionV / d.shuntOhm

/** How that current changes with the junction's voltage, always negative or 0. [A/V] */
const junctionSlope = (d: Diode, junctionV: number): number =>
  -(d.saturationA / d.thermalV) * Math.exp(junctionV / d.thermalV) - 1 / d.shuntOhm

/**
 * Junction voltage at which a current flows: Newton from the right, where it cannot overshoot.
 *
 * @param currentA  current through the cell, any sign. [A]
 * @param startV    a voltage at or right of the answer, if one is known. [V]
 * @returns −Infinity where no voltage drives that current (no shunt, more than the light current)
 */
export function junctionV(d: Diode, currentA: number, startV = Number.NaN): number {
  const spare = d.lightA - currentA
  if (spare + d.saturationA <= 0 && d.shuntOhm === Infinity) return -Infinity
  let x = startV === startV ? startV : Math.max(0, d.thermalV * Math.log1p(Math.max(0, spare) / d.saturationA))
  for (let step = 0; step < MOST_STEPS; step++) {
    const move = (junctionCurrentA(d, x) - currentA) / junctionSlope(d, x)
    x -= move
    if (Math.abs(move) <= CLOSE_ENOUGH * (Math.abs(x) + d.thermalV)) break
  }
  return x
}

/** Voltage at the cell's terminals while a current flows; −Infinity where none drives it. [V] */
export const voltageAtCurrent = (d: Diode, currentA: number): number => junctionV(d, currentA) - currentA * d.seriesOhm

/** Voltage with open terminals; 0 in the dark. [V] */
export const openCircuitV = (d: Diode): number => (d.lightA > 0 ? junctionV(d, 0) : 0)

/**
 * Current at a voltage across the terminals, any sign.
 *
 * @param volts  voltage at the terminals. [V]
 */
export function currentAtVoltage(d: Diode, volts: number): number {
  if (d.seriesOhm === 0) return junctionCurrentA(d, volts)
  const driven = volts / d.seriesOhm + d.lightA
  const wall = driven > 0 ? d.thermalV * Math.log1p(driven / d.saturationA) : 0
  let x = Math.max(volts, Math.min(volts + d.seriesOhm * (d.lightA + d.saturationA), wall))
  for (let step = 0; step < MOST_STEPS; step++) {
    const off = x - d.seriesOhm * junctionCurrentA(d, x) - volts
    const move = off / (1 - d.seriesOhm * junctionSlope(d, x))
    x -= move
    if (Math.abs(move) <= CLOSE_ENOUGH * (Math.abs(x) + d.thermalV)) break
  }
  return junctionCurrentA(d, x)
}

/** Current through shorted terminals; 0 in the dark. [A] */
export const shortCircuitA = (d: Diode): number => (d.lightA > 0 ? currentAtVoltage(d, 0) : 0)

/**
 * Best point of the curve: where power stops growing, solved to the last digits.
 *
 * Newton on dP/dx = I + I′·(x − 2·I·Rs) = 0 over Bishop's junction voltage x, halving the bracket where Newton leaves
 * it. The dark gives exactly 0 W at 0 V.
 *
 * @source Bishop 1988, Computer simulation of the effects of electrical mismatches in photovoltaic cell interconnection
 *   circuits
 */
export function maximumPower(d: Diode): OperatingPoint {
  if (!(d.lightA > 0)) return { W: 0, V: 0, A: 0 }
  let low = 0
  let high = openCircuitV(d)
  let x = Math.max(0.5 * high, high - d.thermalV * Math.log1p(high / d.thermalV))
  for (let step = 0; step < MOST_STEPS; step++) {
    const I = junctionCurrentA(d, x)
    const slope = junctionSlope(d, x)
    const bend = -(d.saturationA / d.thermalV ** 2) * Math.exp(x / d.thermalV)
    const growth = I + slope * (x - 2 * I * d.seriesOhm)
    if (growth > 0) low = x
    else high = x
    const growthSlope = 2 * slope + bend * (x - 2 * I * d.seriesOhm) - 2 * d.seriesOhm * slope * slope
    let next = x - growth / growthSlope
    if (!(next > low && next < high)) next = 0.5 * (low + high)
    const move = next - x
    x = next
    if (Math.abs(move) <= CLOSE_ENOUGH * d.thermalV) break
  }
  const A = junctionCurrentA(d, x)
  const V = x - A * d.seriesOhm
  return { W: A * V, V, A }
}
