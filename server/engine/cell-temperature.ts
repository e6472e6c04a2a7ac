/** What both kinds of cooling share. */
interface HeldHeat {
  /** Heat that a panel takes up per kelvin and area; where left out none: it follows light and air at once. [J/m²K] */
  capacityJm2K?: number
}

/** Open rack by Faiman: heat loss u0 + u1·wind. Only for wind, not for a car's speed. */
export interface FaimanCooling extends HeldHeat {
  kind: 'faiman'
  /** Heat loss in still air. [W/m²K] */
  u0: number
  /** Added per m/s of wind. [W·s/m³K] */
  u1: number
  /** Wind above this counts as this; where left out `FAIMAN_MOST_MPS`. [m/s] */
  mostMps?: number
}

/** A panel on a car: air along its upper side, its back insulated. */
export interface CarCooling extends HeldHeat {
  kind: 'car'
  /** Share of the light that turns to heat: absorptance minus efficiency, 0..1. */
  heatFraction: number
  /** Length over which the air flows along the panel. [m] */
  lengthM: number
  /** Loss by radiation, 5..6. [W/m²K] */
  radiationWm2K: number
  /** Least loss of all, parked in still air, 15..20. [W/m²K] */
  stillWm2K: number
  /** Whether the flow starts laminar, as over a clean smooth nose; else turbulent from the front edge on. */
  startsLaminar?: boolean
}

export type Cooling = FaimanCooling | CarCooling

/**
 * One form for both kinds: heat loss U = max(floor, steady + perMps·min(v, most) + plate), with plate =
 * laminar·v^0.5 below `turbulentFromMps`, turbulent·v^0.8 − less above; share of light that heats; heat held.
 */
export interface HeatLoss {
  heatFraction: number
  floorWm2K: number
  steadyWm2K: number
  perMps: number
  mostMps: number
  laminar: number
  turbulentFromMps: number
  turbulent: number
  lessWm2K: number
  capacityJm2K: number
}

/** Highest wind for which an open rack's formula is used; common practice, no source. [m/s] */
export const FAIMAN_MOST_MPS = 10

/** Air at about 35 °C: kinematic viscosity [m²/s], conductivity [W/mK], Prandtl number (from memory, standard tables). */
const AIR = { viscosity: 1.62e-5, conductivity: 0.026, prandtl: 0.71 }

/** Reynolds number at which flow along a flat plate turns turbulent (Incropera & DeWitt, ch. 7, from memory). */
const TURBULENT_FROM_REYNOLDS = 5e5
/** What the laminar start takes off the turbulent Nusselt number, before Pr^⅓ (same source). */
const LAMINAR_START_LESS = 871

/** A car's cooling with the values of a race car of today; common practice, no source. */
export const CAR_COOLING: CarCooling = {
  kind: 'car',
  heatFraction: 0.67,
  lengthM: 2,
  radiationWm2K: 5.5,
  stillWm2K: 17,
  capacityJm2K: 3000,
}

type Plate = Pick<HeatLoss, 'laminar' | 'turbulentFromMps' | 'turbulent' | 'lessWm2K'>

/**
 * Heat passed to air that flows along a flat plate, mean over its length: Nu = 0.037·Re^0.8·Pr^⅓ where it is turbulent
 * from the front edge on; with a laminar start Nu = (0.037·Re^0.8 − 871)·Pr^⅓ from Re = 5e5 on and 0.664·Re^0.5·Pr^⅓
 * below.
 *
 * @param airSpeedMps    speed of the air along the plate. [m/s]
 * @param lengthM        length in the direction of the flow. [m]
 * @param startsLaminar  whether the flow starts laminar
 * @returns heat transfer coefficient. [W/m²K]
 * @source Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, ch. 7, flat plate (from memory)
 */
export const plateHeatWm2K = (airSpeedMps: number, lengthM: number, startsLaminar = false): number =>
  alongPlate(plate(lengthM, startsLaminar), airSpeedMps)

function plate(lengthM: number, startsLaminar: boolean): Plate {
  const perNusselt = (AIR.prandtl ** (1 / 3) * AIR.conductivity) / lengthM
  const perMps = lengthM / AIR.viscosity
  const turbulent = 0.037 * perNusselt * perMps ** 0.8
  if (!startsLaminar) return { laminar: 0, turbulentFromMps: 0, turbulent, lessWm2K: 0 }
  return {
    laminar: 0.664 * perNusselt * Math.sqrt(perMps),
    turbulentFromMps: TURBULENT_FROM_REYNOLDS / perMps,
    turbulent,
    lessWm2K: LAMINAR_START_LESS * perNusselt,
  }
}

const alongPlate = (plate: Plate, airSpeedMps: number): number =>
  airSpeedMps < plate.turbulentFromMps
    ? plate.laminar * Math.sqrt(airSpeedMps)
    : plate.turbulent * airSpeedMps ** 0.8 - plate.lessWm2K

/** The heat loss that a kind of cooling means, in the one form that is read from here on. */
export function heatLoss(cooling: Cooling): HeatLoss {
  const { capacityJm2K = 0 } = cooling
  if (cooling.kind === 'faiman')
    return {
      heatFraction: 1,
      floorWm2K: 0,
      steadyWm2K: cooling.u0,
      perMps: cooling.u1,
      mostMps: cooling.mostMps ?? FAIMAN_MOST_MPS,
      laminar: 0,
      turbulentFromMps: 0,
      turbulent: 0,
      lessWm2K: 0,
      capacityJm2K,
    }
  return {
    heatFraction: cooling.heatFraction,
    floorWm2K: cooling.stillWm2K,
    steadyWm2K: cooling.radiationWm2K,
    perMps: 0,
    mostMps: 0,
    ...plate(cooling.lengthM, cooling.startsLaminar ?? false),
    capacityJm2K,
  }
}

/** Heat lost per kelvin over the air at an air speed. [W/m²K] */
export const heatLossWm2K = (loss: HeatLoss, airSpeedMps: number): number =>
  Math.max(
    loss.floorWm2K,
    loss.steadyWm2K +
      loss.perMps * Math.min(airSpeedMps, loss.mostMps) +
      (loss.turbulent === 0 ? 0 : alongPlate(loss, airSpeedMps)),
  )

/**
 * Temperature that cells settle at in light and moving air; `cell-warmth.ts` leads there in time.
 *
 * 'faiman' for open racks in wind up to about 10 m/s, wind above counting as that; 'car' for a faired panel at any road
 * speed. Open-rack formulas are not for road speed: carried on to 25 m/s they would cool three times too well.
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
