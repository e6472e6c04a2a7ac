import { type AimStrings, aimStrings } from './aim-strings.ts'
import { checkArray, checkSteps } from './array-check.ts'
import { type Cooling, type HeatLoss, heatLoss } from './cell-temperature.ts'
import { cellWarmth, type WarmthAlong, warmthAlong } from './cell-warmth.ts'
import { type HorizonsAlong, hideSky } from './horizon.ts'
import { type IncidenceLaw, incidenceTable } from './incidence.ts'
import {
  type AimAlong,
  BLOCK_STEPS,
  fillSky,
  type LightAlong,
  type LitPanel,
  type PoseAlong,
  panelLight,
  skyBlock,
} from './panel-light.ts'
import { aimAlong } from './pointing.ts'
import { fillLit, type ShadeRow, shade } from './shade.ts'
import type { Stand } from './stand.ts'
import { fillStrings, type PreparedStrings, prepareStrings } from './string-harvest.ts'
import type { StringModel } from './substrings.ts'

/** One flat facet of the array. */
export interface Panel {
  /** Tips the normal forward. [rad] */
  pitchRad: number
  /** Tips the normal to the right. [rad] */
  rollRad: number
  /** Goes up with the stand when the array is lifted. */
  lifts: boolean
  cooling: Cooling
  /** Law by which the cover loses slanting beams. */
  incidence: IncidenceLaw
  /** Law for sky and ground; where left out 'martin-ruiz', or 'none' where the beam loses nothing. */
  diffuseIncidence?: 'none' | 'martin-ruiz'
  /** What the car itself takes from it; left out, nothing. */
  shade?: ShadeRow[]
}

/** The array as a whole. */
export interface ArrayModel {
  panels: Panel[]
  stand: Stand | null
  strings: StringModel[]
  /** Share of light that the ground throws back, 0..1. */
  albedo: number
  skyModel: 'hay-davies' | 'perez'
}

/** A checked array with its tables. */
export interface PreparedArray {
  model: ArrayModel
  panels: LitPanel[]
  strings: PreparedStrings
  aim: AimStrings
}

/** Steps to work out: weather and the car's pose. */
export interface ArraySteps extends PoseAlong {
  weather: LightAlong
  /** Length of each step, without gaps between them; left out, every step is steady. [s] */
  durationS?: Float64Array
  /** Air over the panels, where it is not the weather's. [°C] */
  overPanelsC?: Float64Array
  /** Steps of one number share a pose of the lifted array; left out, every step has its own. */
  hold?: Int32Array
  /** Poses of the lifted array, where they are given rather than found. */
  aim?: AimAlong
  /** What stands around the car; left out, nothing. */
  horizons?: HorizonsAlong
  /** Solves every step exactly instead of reading tables. */
  exact?: boolean
}

/** What the array gives: per string and per panel, one value a step. */
export interface ArrayHarvest {
  bestW: Float64Array[]
  bestV: Float64Array[]
  /** Before incidence losses. */
  planeWm2: Float64Array[]
  /** After incidence losses, before soiling. */
  effectiveWm2: Float64Array[]
  /** Mean over the step. */
  cellC: Float64Array[]
  /** NaN where the array is not lifted. */
  aimTiltRad: Float64Array
  aimAzimuthRad: Float64Array
}

/**
 * Checks an array and builds its tables: one a kind of cell, one a cover.
 *
 * @throws InputError that names the first wrong field
 */
export function prepareArray(model: ArrayModel): PreparedArray {
  checkArray(model)
  const covers = new Map<IncidenceLaw, Float64Array>()
  const coverOf = (law: IncidenceLaw): Float64Array | null => {
    if (law === 'none') return null
    const table = covers.get(law) ?? incidenceTable(law)
    covers.set(law, table)
    return table
  }
  const losses = new Map<string, HeatLoss>()
  const lossOf = (cooling: Cooling): HeatLoss => {
    const key = JSON.stringify(cooling)
    const loss = losses.get(key) ?? heatLoss(cooling)
    losses.set(key, loss)
    return loss
  }
  const panels = model.panels.map((panel, p) => ({
    pitchRad: panel.pitchRad,
    rollRad: panel.rollRad,
    lifts: panel.lifts,
    beamTable: coverOf(panel.incidence),
    losesDiffuse: panel.incidence !== 'none' && panel.diffuseIncidence !== 'none',
    shade: panel.shade === undefined ? null : shade(`panels[${p}].shade`, panel.shade),
    loss: lossOf(panel.cooling),
  }))
  return {
    model,
    panels,
    strings: prepareStrings(model.strings),
    aim: aimStrings(panels, model.strings),
  }
}

/**
 * What every string could give at its best point, step by step, and the light and warmth of every panel.
 *
 * Beam, sky and ground on each panel from the apparent sun; cells warmed by all light on the plane, in time where the
 * steps tell their lengths; power of strings in one light from tables (within 0.04 %), of others solved with their
 * bypass diodes (within 0.003 %). Lifted, the car's own up direction is turned to where the stand aims (`pointing.ts`),
 * and lifting panels keep their pitch and roll on it; the stand holds the array, so grade does not count. Darkness gives
 * exactly 0 W.
 *
 * @throws InputError when a list has another length than the weather, or steps are lifted without a stand
 */
export function arrayHarvest(array: PreparedArray, steps: ArraySteps): ArrayHarvest {
  const count = steps.weather.dniWm2.length
  checkSteps(array.model, steps, count)
  const perPanel = (): Float64Array[] => array.panels.map(() => new Float64Array(count))
  const perString = (): Float64Array[] => array.model.strings.map(() => new Float64Array(count))
  const harvest = {
    bestW: perString(),
    bestV: perString(),
    planeWm2: perPanel(),
    effectiveWm2: perPanel(),
    cellC: perPanel(),
    aimTiltRad: new Float64Array(count).fill(Number.NaN),
    aimAzimuthRad: new Float64Array(count).fill(Number.NaN),
  }
  lightPanels(array, steps, harvest)
  warmPanels(array, steps, harvest)
  fillStrings(array.strings, harvest, steps.exact === true)
  return harvest
}

function lightPanels(array: PreparedArray, steps: ArraySteps, harvest: ArrayHarvest): void {
  const { albedo, skyModel, stand } = array.model
  const count = harvest.aimTiltRad.length
  const block = skyBlock()
  const ownShade = new Float64Array(BLOCK_STEPS)
  const aim = { tiltRad: harvest.aimTiltRad, azimuthRad: harvest.aimAzimuthRad }
  if (steps.aim !== undefined) {
    aim.tiltRad.set(steps.aim.tiltRad)
    aim.azimuthRad.set(steps.aim.azimuthRad)
  } else if (stand !== null) aimAlong(array, stand, steps, aim)
  for (let from = 0; from < count; from += BLOCK_STEPS) {
    const to = Math.min(count, from + BLOCK_STEPS)
    fillSky(skyModel, steps.weather, from, to, block)
    if (steps.horizons !== undefined) hideSky(steps.horizons, from, to, block)
    array.panels.forEach((panel, p) => {
      const { lifts, shade } = panel
      if (shade !== null) fillLit({ lifts, shade }, { pose: steps, aim }, { from, to, block }, ownShade)
      panelLight(
        panel,
        { pose: steps, aim },
        { from, to, block, albedo, lit: shade === null ? null : ownShade },
        { planeWm2: harvest.planeWm2[p], effectiveWm2: harvest.effectiveWm2[p] },
      )
    })
  }
}

function warmPanels(array: PreparedArray, steps: ArraySteps, harvest: ArrayHarvest): void {
  const kinds = new Map<HeatLoss, WarmthAlong>()
  array.panels.forEach(({ loss }, p) => {
    const kind = kinds.get(loss) ?? warmthAlong(loss, steps.airSpeedMps, steps.durationS)
    kinds.set(loss, kind)
    cellWarmth(kind, steps.overPanelsC ?? steps.weather.airC, harvest.planeWm2[p], harvest.cellC[p])
  })
}
