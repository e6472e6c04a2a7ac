/** Open rack by Faiman: heat loss u0 + u1·wind. Only for wind, not for a car's speed. */
export interface FaimanCooling {
  kind: 'faiman'
  /** Heat loss in still air. [W/m²K] */
  u0: number
  /** Added per m/s of wind. [W·s/m³K] */
  u1: number
}

/** A panel on a car: air along its upper side, its back insulated. */
export interface CarCooling {
  kind: 'car'
  /** Share of the light that turns to heat: absorptance minus efficiency, 0..1. */
  heatFraction: number
  /** Length over which the air flows along the panel. [m] */
  lengthM: number
  /** Loss by radiation, 5..6. [W/m²K] */
  radiationWm2K: number
  /** Least loss of all, parked in still air, 15..20. [W/m²K] */
  stillWm2K: number
}

export type Cooling = FaimanCooling | CarCooling

/** One form for both kinds: heat loss U = max(floor, steady + perMps·v + turbulent·v^0.8), share of light that heats. */
export interface HeatLoss {
  heatFraction: number
  floorWm2K: number
  steadyWm2K: number
  perMps: number
  turbulent: number
}

/** Air at about 35 °C: kinematic viscosity [m²/s], conductivity [W/mK], Prandtl number (from memory, standard tables). */
const AIR = { viscosity: 1.62e-5, conductivity: 0.026, prandtl: 0.71 }

/** A car's cooling with the values of a race car of today; common practice, no source. */
export const CAR_COOLING: CarCooling = {
  kind: 'car',
  heatFraction: 0.67,
  lengthM: 2,
  radiationWm2K: 5.5,
  stillWm2K: 17,
}

/**
 * Heat passed to air that flows turbulently along a flat plate, Nu = 0.037·Re^0.8·Pr^⅓ over the whole length.
 *
 * @param airSpeedMps  speed of the air along the plate. [m/s]
 * @param lengthM      length in the direction of the flow. [m]
 * @returns heat transfer coefficient. [W/m²K]
 * @source Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, ch. 7, turbulent plate (from memory)
 */
export const plateHeatWm2K = (airSpeedMps: number, lengthM: number): number =>
  turbulentFactor(lengthM) * airSpeedMps ** 0.8

const turbulentFactor = (lengthM: number): number =>
  ((0.037 * AIR.prandtl ** (1 / 3) * AIR.conductivity) / lengthM) * (lengthM / AIR.viscosity) ** 0.8

/** The heat loss that a kind of cooling means, in the one form that `cellTemperatureC` reads. */
export function heatLoss(cooling: Cooling): HeatLoss {
  if (cooling.kind === 'faiman')
    return { heatFraction: 1, floorWm2K: 0, steadyWm2K: cooling.u0, perMps: cooling.u1, turbulent: 0 }
  return {
    heatFraction: cooling.heatFraction,
    floorWm2K: cooling.stillWm2K,
    steadyWm2K: cooling.radiationWm2K,
    perMps: 0,
    turbulent: turbulentFactor(cooling.lengthM),
  }
}

/** Heat lost per kelvin over the air at an air speed. [W/m²K] */
export const heatLossWm2K = (loss: HeatLoss, airSpeedMps: number): number =>
  Math.max(
    loss.floorWm2K,
    loss.steadyWm2K + loss.perMps * airSpeedMps + (loss.turbulent === 0 ? 0 : loss.turbulent * airSpeedMps ** 0.8),
  )

/**
 * Temperature that cells settle at in light and moving air; what they remember of earlier minutes is left out.
 *
 * 'faiman' for open racks in wind up to about 10 m/s; 'car' for a faired panel at any road speed. Open-rack formulas are
 * not for road speed: at 25 m/s they cool three times too well.
 *
 * @param airC         air temperature. [°C]
 * @param planeWm2     light on the panel before it is lost at the cover. [W/m²]
 * @param airSpeedMps  speed of the air over the panel, the car's own and the wind's together. [m/s]
 * @source Faiman 2008, Assessing the outdoor operating temperature of photovoltaic modules; for 'car' `plateHeatWm2K`
 */
export function cellTemperatureC(cooling: Cooling, airC: number, planeWm2: number, airSpeedMps: number): number {
  const loss = heatLoss(cooling)
  return airC + (loss.heatFraction * planeWm2) / heatLossWm2K(loss, airSpeedMps)
}
