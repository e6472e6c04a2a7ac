import type { ArrayModel, ArraySteps, Panel } from './array.ts'
import type { Cooling } from './cell-temperature.ts'
import { InputError } from './input-error.ts'
import type { Stand } from './stand.ts'
import type { StringModel } from './string.ts'

const RIGHT_ANGLE_RAD = Math.PI / 2

function within(field: string, value: number, least: number, most: number, unit: string): void {
  if (value >= least && value <= most) return
  throw new InputError('out-of-range', field, `is ${value}${unit}, expected ${least} to ${most}${unit}`)
}

function positive(field: string, value: number, unit: string): void {
  if (value > 0 && value < Infinity) return
  throw new InputError('out-of-range', field, `is ${value}${unit}, expected more than 0${unit}`)
}

function wholeFrom(field: string, value: number, least: number): void {
  if (Number.isInteger(value) && value >= least) return
  throw new InputError('not-whole', field, `is ${value}, expected a whole number from ${least} up`)
}

function checkCooling(field: string, cooling: Cooling): void {
  within(`${field}.capacityJm2K`, cooling.capacityJm2K ?? 0, 0, 1e6, ' J/m²K')
  if (cooling.kind === 'faiman') {
    positive(`${field}.u0`, cooling.u0, ' W/m²K')
    within(`${field}.u1`, cooling.u1, 0, 100, ' W·s/m³K')
    within(`${field}.mostMps`, cooling.mostMps ?? 0, 0, Infinity, ' m/s')
    return
  }
  within(`${field}.heatFraction`, cooling.heatFraction, 0, 1, '')
  positive(`${field}.lengthM`, cooling.lengthM, ' m')
  within(`${field}.radiationWm2K`, cooling.radiationWm2K, 0, 100, ' W/m²K')
  positive(`${field}.stillWm2K`, cooling.stillWm2K, ' W/m²K')
}

function checkPanel(field: string, panel: Panel): void {
  within(`${field}.pitchRad`, panel.pitchRad, -RIGHT_ANGLE_RAD, RIGHT_ANGLE_RAD, ' rad')
  within(`${field}.rollRad`, panel.rollRad, -RIGHT_ANGLE_RAD, RIGHT_ANGLE_RAD, ' rad')
  checkCooling(`${field}.cooling`, panel.cooling)
}

function checkStand(stand: Stand): void {
  within('stand.tiltMinRad', stand.tiltMinRad, 0, RIGHT_ANGLE_RAD, ' rad')
  within('stand.tiltMaxRad', stand.tiltMaxRad, stand.tiltMinRad, RIGHT_ANGLE_RAD, ' rad')
  within('stand.azimuthFromRad', stand.azimuthFromRad, -4 * Math.PI, 4 * Math.PI, ' rad')
  within('stand.azimuthToRad', stand.azimuthToRad, -4 * Math.PI, 4 * Math.PI, ' rad')
  within('stand.reaimS', stand.reaimS, 0, 86_400, ' s')
}

function checkString(field: string, string: StringModel, panels: number): void {
  const { cell } = string
  positive(`${field}.cell.lightA`, cell.lightA, ' A')
  positive(`${field}.cell.saturationA`, cell.saturationA, ' A')
  within(`${field}.cell.seriesOhm`, cell.seriesOhm, 0, 1000, ' Ω')
  positive(`${field}.cell.shuntOhm`, cell.shuntOhm, ' Ω')
  positive(`${field}.cell.modifiedIdealityV`, cell.modifiedIdealityV, ' V')
  within(`${field}.cell.currentCoefficientAPerC`, cell.currentCoefficientAPerC, -1, 1, ' A/K')
  within(`${field}.cell.bandGapEv`, cell.bandGapEv, 0.1, 5, ' eV')
  within(`${field}.cell.bandGapPerC`, cell.bandGapPerC, -0.01, 0.01, ' 1/K')
  wholeFrom(`${field}.cellsInParallel`, string.cellsInParallel, 1)
  within(`${field}.soilingFraction`, string.soilingFraction, 0, 1, '')
  within(`${field}.bypassV`, string.bypassV, 0, 1000, ' V')
  if (string.groups.length === 0)
    throw new InputError('empty', `${field}.groups`, 'is empty, expected one group or more')
  string.groups.forEach((group, g) => {
    const at = `${field}.groups[${g}]`
    wholeFrom(`${at}.panel`, group.panel, 0)
    if (group.panel >= panels)
      throw new InputError('unknown-panel', `${at}.panel`, `is ${group.panel}, expected one of ${panels} panels from 0`)
    wholeFrom(`${at}.cellsInSeries`, group.cellsInSeries, 1)
    if (group.bypassDiodes !== undefined) wholeFrom(`${at}.bypassDiodes`, group.bypassDiodes, 1)
  })
}

/** @throws InputError that names the array's first wrong field, its value and what was expected */
export function checkArray(model: ArrayModel): void {
  within('albedo', model.albedo, 0, 1, '')
  if (model.stand !== null) checkStand(model.stand)
  model.panels.forEach((panel, p) => checkPanel(`panels[${p}]`, panel))
  model.strings.forEach((string, s) => checkString(`strings[${s}]`, string, model.panels.length))
}

/** @throws InputError when a list of steps has the wrong length, or the array is lifted without a stand */
export function checkSteps(model: ArrayModel, steps: ArraySteps, count: number): void {
  for (const field of ['headingRad', 'gradeRad', 'airSpeedMps', 'lifted'] as const)
    if (steps[field].length !== count)
      throw new InputError('wrong-length', field, `has ${steps[field].length} steps, expected ${count} as the weather`)
  for (const field of ['durationS', 'overPanelsC'] as const) {
    const length = steps[field]?.length ?? count
    if (length !== count)
      throw new InputError('wrong-length', field, `has ${length} steps, expected ${count} as the weather`)
  }
  const places = steps.horizons?.at.length ?? count
  if (places !== count)
    throw new InputError('wrong-length', 'horizons.at', `has ${places} steps, expected ${count} as the weather`)
  if (model.stand === null && steps.lifted.includes(1))
    throw new InputError('no-stand', 'lifted', 'is 1 at a step, expected 0 everywhere because the array has no stand')
}
