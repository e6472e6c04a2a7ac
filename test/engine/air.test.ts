import { describe, expect, it } from 'vitest'
import {
  airDensityKgM3,
  airTemperatureAtC,
  pressureAtPa,
  saturationVapourPa,
  standardPressurePa,
  stationFromSeaLevelPa,
  vapourFromDewPointPa,
  vapourFromHumidityPa,
} from '../../server/engine/air.ts'

const relative = (value: number, expected: number): number => Math.abs(value / expected - 1)

// US Standard Atmosphere 1976, geometric heights: temperature, pressure, density (domain figures, table as printed)
const STANDARD = [
  { altM: 0, kelvin: 288.15, pressurePa: 101_325, densityKgM3: 1.225 },
  { altM: 500, kelvin: 284.9, pressurePa: 95_461, densityKgM3: 1.1673 },
  { altM: 1000, kelvin: 281.651, pressurePa: 89_876, densityKgM3: 1.1117 },
  { altM: 2000, kelvin: 275.154, pressurePa: 79_501, densityKgM3: 1.0066 },
]

describe.each(STANDARD)('the US Standard Atmosphere 1976 at $altM m', ({ altM, kelvin, pressurePa, densityKgM3 }) => {
  it('has its density', () => {
    expect(relative(airDensityKgM3(pressurePa, kelvin - 273.15, 0), densityKgM3)).toBeLessThan(1e-4)
  })

  it('has its pressure and temperature when brought up from the sea', () => {
    expect(relative(standardPressurePa(altM), pressurePa)).toBeLessThan(2e-4)
    expect(relative(pressureAtPa(101_325, 0, altM, 15), pressurePa)).toBeLessThan(2e-4)
    expect(Math.abs(airTemperatureAtC(15, 0, altM) + 273.15 - kelvin)).toBeLessThan(0.005)
  })
})

// CIPM-2007 (Picard et al. 2008, Metrologia 45, 149), computed
const MOIST = [
  { pressurePa: 101_325, airC: 20, humidity: 0.5, densityKgM3: 1.19931 },
  { pressurePa: 101_325, airC: 35, humidity: 0.2, densityKgM3: 1.14096 },
  { pressurePa: 95_000, airC: 35, humidity: 0.2, densityKgM3: 1.06943 },
]

it.each(MOIST)('moist air of $airC °C weighs what CIPM-2007 says within 0.05 %', (air) => {
  const vapourPa = vapourFromHumidityPa(air.airC, air.humidity)
  expect(relative(airDensityKgM3(air.pressurePa, air.airC, vapourPa), air.densityKgM3)).toBeLessThan(5e-4)
})

it('saturated vapour has its tabulated pressure', () => {
  // Wexler 1976 as tabulated: 611.2 Pa at 0 °C, 2339 Pa at 20 °C, 7384 Pa at 40 °C (from memory)
  expect(relative(saturationVapourPa(0), 611.2)).toBeLessThan(1e-3)
  expect(relative(saturationVapourPa(20), 2339)).toBeLessThan(3e-3)
  expect(relative(saturationVapourPa(40), 7384)).toBeLessThan(3e-3)
})

it('air at its dew point is saturated', () => {
  expect(vapourFromDewPointPa(12)).toBe(vapourFromHumidityPa(12, 1))
})

describe('pressure brought to another height', () => {
  it('falls by the hypsometric equation worked by hand', () => {
    // 1,000 Pa layer by hand: 300 m up from 20 °C, layer mean 292.175 K: exp(-9.80665*300/(287.055*292.175)) = 0.965532
    expect(pressureAtPa(90_000, 400, 700, 20) / 90_000).toBeCloseTo(0.965532, 5)
  })

  it('comes back the same from up and down', () => {
    const up = pressureAtPa(88_000, 1200, 1900, 24)
    expect(pressureAtPa(up, 1900, 1200, airTemperatureAtC(24, 1200, 1900))).toBeCloseTo(88_000, 6)
  })

  it('makes the station pressure of the standard atmosphere from its sea-level pressure', () => {
    expect(relative(stationFromSeaLevelPa(101_325, 1000, 8.5), 89_876)).toBeLessThan(2e-4)
  })
})
