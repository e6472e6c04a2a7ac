/** Standard gravity. [m/s²] @source BIPM, SI Brochure, 3rd CGPM 1901 */
const GRAVITY = 9.80665
/** Gas constants of dry air and of water vapour. [J/(kg K)] @source CIPM-2007: 8.314472/0.028965, 8.314472/0.018015 */
const DRY_AIR = 287.055
const VAPOUR = 461.523
const ZERO_C_K = 273.15
/** Fall of air temperature with height. [K/m] @source US Standard Atmosphere 1976, lowest layer */
export const LAPSE_C_PER_M = -0.0065

/**
 * Pressure of the standard atmosphere.
 *
 * @param altM  height over the sea, -500..11,000. [m]
 * @returns [Pa]
 * @source US Standard Atmosphere 1976 solved for pressure, as in test/reference/chain.json
 */
export const standardPressurePa = (altM: number): number => 100 * ((44331.514 - altM) / 11880.516) ** (1 / 0.1902632)

/** Temperature of the standard atmosphere, to 11 km. [°C] @source US Standard Atmosphere 1976 */
export const standardAirC = (altM: number): number => 15 + LAPSE_C_PER_M * altM

/**
 * Vapour pressure over water at saturation, -40..60 °C.
 *
 * @param airC  [°C]
 * @returns [Pa]
 * @source Alduchov & Eskridge 1996, J. Appl. Meteor. 35, 601 (Magnus form 610.94, 17.625, 243.04); from memory
 */
export const saturationVapourPa = (airC: number): number => 610.94 * Math.exp((17.625 * airC) / (243.04 + airC))

/** Vapour pressure from relative humidity 0..1. [Pa] */
export const vapourFromHumidityPa = (airC: number, relativeHumidity: number): number =>
  relativeHumidity * saturationVapourPa(airC)

/** Vapour pressure from the dew point: saturation there. [Pa] */
export const vapourFromDewPointPa = (dewPointC: number): number => saturationVapourPa(dewPointC)

/**
 * Density of moist air as a mixture of two ideal gases; within 0.05 % of CIPM-2007 in outdoor air.
 *
 * @param pressurePa  station pressure, not reduced to the sea. [Pa]
 * @param airC        [°C]
 * @param vapourPa    vapour pressure. [Pa]
 * @returns [kg/m³]
 */
export const airDensityKgM3 = (pressurePa: number, airC: number, vapourPa: number): number =>
  ((pressurePa - vapourPa) / DRY_AIR + vapourPa / VAPOUR) / (airC + ZERO_C_K)

/** Air temperature brought to another height by -6.5 K/km. [°C] @source US Standard Atmosphere 1976 */
export const airTemperatureAtC = (airC: number, fromAltM: number, toAltM: number): number =>
  airC + LAPSE_C_PER_M * (toAltM - fromAltM)

/** Exponent of the hypsometric equation: log of pressure at toAltM over that at fromAltM; airC holds at fromAltM. */
export const logPressureRatio = (fromAltM: number, toAltM: number, airC: number, lapseCPerM: number): number => {
  const riseM = toAltM - fromAltM
  return (-GRAVITY * riseM) / (DRY_AIR * (airC + ZERO_C_K + (lapseCPerM * riseM) / 2))
}

/**
 * Pressure brought to another height: hypsometric equation, mean temperature of the layer by -6.5 K/km, dry air.
 *
 * @param pressurePa  at fromAltM. [Pa]
 * @param airC        air temperature at fromAltM. [°C]
 * @returns pressure at toAltM. [Pa]
 * @source Wallace & Hobbs, Atmospheric Science, ch. 3 (hypsometric equation; from memory)
 */
export const pressureAtPa = (pressurePa: number, fromAltM: number, toAltM: number, airC: number): number =>
  pressurePa * Math.exp(logPressureRatio(fromAltM, toAltM, airC, LAPSE_C_PER_M))

/**
 * Station pressure from pressure reduced to the sea.
 *
 * @param seaLevelPa  reduced to the sea. [Pa]
 * @param altM        height of the station. [m]
 * @param airC        air temperature at the station. [°C]
 * @returns [Pa]
 */
export const stationFromSeaLevelPa = (seaLevelPa: number, altM: number, airC: number): number =>
  seaLevelPa / Math.exp(logPressureRatio(altM, 0, airC, LAPSE_C_PER_M))
