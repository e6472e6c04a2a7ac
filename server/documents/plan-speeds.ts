import type { DayPlan } from '../engine/planner/plan-day.ts'
import type { DrivenDay } from './forecast.ts'
import type { SpeedsDocument } from './speeds.ts'

type Sections = Extract<SpeedsDocument, { kind: 'sections' }>

/** Pieces on which neighbours differ by less are one section. [km/h] */
const SAME_KMH = 0.005

/** The best speeds as sections of the stages, one a piece where they differ. */
export function bestSpeeds(day: DrivenDay, plan: DayPlan): SpeedsDocument {
  const { reach, best } = plan
  const kmh = (piece: number): number => round(best.speedMps[piece] * 3.6, 3)
  const runs: Run[] = []
  for (let piece = reach.first; piece < reach.first + reach.count; piece++) {
    const last = runs[runs.length - 1]
    const isSame = last !== undefined && Math.abs(last.speedKmh - kmh(piece)) < SAME_KMH && !startsStage(day, piece)
    if (isSame) last.endPiece = piece + 1
    else runs.push({ firstPiece: piece, endPiece: piece + 1, speedKmh: kmh(piece) })
  }
  return asSections(day, runs)
}

/** The sections for people. */
export const sectionSpeeds = (day: DrivenDay, { reach, forPeople }: DayPlan): SpeedsDocument =>
  asSections(
    day,
    forPeople.sections.map(({ firstPiece, endPiece, speedKmh }) => ({
      firstPiece: reach.first + firstPiece,
      endPiece: reach.first + endPiece,
      speedKmh,
    })),
  )

interface Run {
  firstPiece: number
  endPiece: number
  speedKmh: number
}

const startsStage = (day: DrivenDay, piece: number): boolean =>
  day.race.course.stages.some(({ firstPiece }) => firstPiece === piece)

function asSections(day: DrivenDay, runs: Run[]): Sections {
  const { pieces, stages, lengthM } = day.race.course
  const edgeM = (piece: number): number => (piece < pieces.count ? pieces.fromM[piece] : lengthM)
  const sections = runs.map(({ firstPiece, endPiece, speedKmh }) => {
    const s = stages.findIndex((stage) => firstPiece < stage.endPiece)
    const startM = stages[s].fromM
    return {
      stage: day.stages[s].stage.id,
      fromKm: round((edgeM(firstPiece) - startM) / 1000, 6),
      toKm: round((endPiece === stages[s].endPiece ? stages[s].toM - startM : edgeM(endPiece) - startM) / 1000, 6),
      speedKmh: Math.min(Math.max(speedKmh, 5), 200),
    }
  })
  return { kind: 'sections', speedKmh: 70, sections }
}

const round = (value: number, digits: number): number => Math.round(value * 10 ** digits) / 10 ** digits
