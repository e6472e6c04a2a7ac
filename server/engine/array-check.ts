import type { ArrayModel, ArraySteps, Panel } from './array.ts'
import type { Cooling } from './cell-temperature.ts'
import { InputError } from './input-error.ts'
import { positive, within } from './number-check.ts'
import type { Stand } from './stand.ts'
import { checkString } from './string-check.ts'

const RIGHT_ANGLE_RAD = Math.PI / 2

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
