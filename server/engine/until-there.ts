import type { Standing } from './day-rules.ts'
import type { Race } from './forecast.ts'

/**
 * A race in which a day's road ends before its stages do: the car is parked there until the next morning.
 *
 * @param endPiece  the piece in front of which it is parked, inside a stage that the day may drive or at its end
 * @param finish    what the place is called
 */
export function dayUntil(race: Race, dayIndex: number, endPiece: number, finish: string): Race {
  const { course, stages, days } = race
  const s = course.stages.findIndex((stage) => endPiece <= stage.endPiece)
  const toM = placeOf(race, endPiece)
  return {
    ...race,
    course: { ...course, stages: course.stages.map((stage, i) => (i === s ? { ...stage, endPiece, toM } : stage)) },
    stages: stages.map((stage, i) => (i === s ? { ...stage, finish, stop: null } : stage)),
    days: days.map((day, d) => (d === dayIndex ? { ...day, lastStage: s } : day)),
  }
}

/** Where the car stands the next morning, in front of a piece: a stop there is still to be stood. */
export function standingBefore(race: Race, endPiece: number): Standing {
  const { course, stages } = race
  const s = course.stages.findIndex((stage) => endPiece <= stage.endPiece)
  const placeM = placeOf(race, endPiece)
  if (endPiece < course.stages[s].endPiece) return { stage: s, placeM, stopLeftS: 0 }
  return { stage: s + 1, placeM, stopLeftS: stages[s].stop?.lengthS ?? 0 }
}

function placeOf({ course }: Race, endPiece: number): number {
  const end = course.stages.find((stage) => stage.endPiece === endPiece)
  return end?.toM ?? course.pieces.fromM[endPiece]
}
