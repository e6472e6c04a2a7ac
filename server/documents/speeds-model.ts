import type { Course } from '../engine/course.ts'
import { InputError } from '../engine/input-error.ts'
import type { PlacedStage } from './race-model.ts'
import type { SpeedsDocument } from './speeds.ts'

type Given = Exclude<SpeedsDocument, { kind: 'meet-target' }>

/**
 * Speed wanted on each piece on one day.
 *
 * @param dates  dates of the race's days
 * @throws InputError when a leg or a section names a stage or a date that the race does not have
 */
export function wantedMps(
  speeds: Given,
  course: Course,
  stages: PlacedStage[],
  day: { date: string; dates: string[] },
): Float64Array {
  const wanted = new Float64Array(course.pieces.count).fill(speeds.speedKmh / 3.6)
  if (speeds.kind === 'legs') fillLegs(wanted, speeds, course, stages, day)
  if (speeds.kind === 'sections') fillSections(wanted, speeds, course, stages)
  return wanted
}

/** Where sections begin and end on a stage, from its start: pieces of the course must be cut there. [km] */
export const sectionCutsKm =
  (speeds: SpeedsDocument) =>
  (stage: string): number[] =>
    speeds.kind === 'sections'
      ? speeds.sections.filter((s) => s.stage === stage).flatMap(({ fromKm, toKm }) => [fromKm, toKm])
      : []

/** A piece belongs to the section that holds its middle; the course is cut where sections begin and end. */
function fillSections(
  wanted: Float64Array,
  speeds: Extract<Given, { kind: 'sections' }>,
  course: Course,
  stages: PlacedStage[],
): void {
  const { fromM, lengthM } = course.pieces
  speeds.sections.forEach((section, i) => {
    const stage = course.stages[stageIndex(stages, section.stage, `speeds.sections[${i}].stage`)]
    const lengthKm = (stage.toM - stage.fromM) / 1000
    if (section.fromKm >= lengthKm)
      throw new InputError(
        'off-the-stage',
        `speeds.sections[${i}].fromKm`,
        `${section.fromKm} given; expected less than the length of the stage (${lengthKm.toFixed(3)} km)`,
      )
    for (let p = stage.firstPiece; p < stage.endPiece; p++) {
      const middleKm = (fromM[p] + lengthM[p] / 2 - stage.fromM) / 1000
      if (middleKm >= section.fromKm && middleKm < section.toKm) wanted[p] = section.speedKmh / 3.6
    }
  })
}

function fillLegs(
  wanted: Float64Array,
  speeds: Extract<Given, { kind: 'legs' }>,
  course: Course,
  stages: PlacedStage[],
  day: { date: string; dates: string[] },
): void {
  speeds.legs.forEach((leg, i) => {
    const stage = course.stages[stageIndex(stages, leg.stage, `speeds.legs[${i}].stage`)]
    if (leg.date !== undefined && !day.dates.includes(leg.date))
      throw new InputError(
        'unknown-date',
        `speeds.legs[${i}].date`,
        `${leg.date} given; expected a day of the race (${day.dates.join(', ')})`,
      )
    if (leg.date === undefined || leg.date === day.date)
      wanted.fill(leg.speedKmh / 3.6, stage.firstPiece, stage.endPiece)
  })
}

function stageIndex(stages: PlacedStage[], id: string, field: string): number {
  const index = stages.findIndex((s) => s.stage.id === id)
  if (index >= 0) return index
  const known = stages.map((s) => JSON.stringify(s.stage.id)).join(', ')
  throw new InputError('unknown-stage', field, `${JSON.stringify(id)} given; expected one of ${known}`)
}
