import { type DayTables, pieceS } from './day-tables.ts'
import { type Drive, simulate } from './simulate.ts'

/** A run of pieces with one speed for the driver. */
export interface Section {
  firstPiece: number
  endPiece: number
  speedKmh: number
}

/** Sections are meant to be so long; a stage shorter than this is one. [M] */
const MEANT_M = 15_000
const MOST_MOVES = 400

/**
 * A plan for people: few sections of 10 to 20 km, each with one whole speed, the limits inside them kept.
 *
 * Starts from the rounded pace of the best speeds. Then, one km/h at a time, the section is slowed that costs least
 * time for what it saves until floor and target are kept, and the one is sped up that gains most while they are.
 *
 * @param stageEnds  pieces at which a section must end, ascending; the last is the day's end
 * @param bestMps    the best speeds. [Mps] (pieces)
 */
export function sectionsFor(
  day: DayTables,
  stageEnds: number[],
  bestMps: Float64Array,
  waitS: Float64Array,
): Section[] {
  const sections = cut(day, stageEnds).map((one) => ({ ...one, speedKmh: Math.round(paceKmh(day, one, bestMps)) }))
  const trackOf = () => simulate(day, driveOf(day, sections, waitS))
  let now = trackOf()
  for (let move = 0; move < MOST_MOVES && now.shortJ > 0; move++) {
    const slower = best(sections, -1, (before) => {
      const after = trackOf()
      return {
        worth: (now.shortJ - after.shortJ) / Math.max(endOf(after) - endOf(now), 1e-3),
        isOpen: after.shortJ < now.shortJ && before > 5,
      }
    })
    if (slower === null) break
    slower.speedKmh--
    now = trackOf()
  }
  for (let move = 0; move < MOST_MOVES; move++) {
    const faster = best(sections, 1, () => {
      const after = trackOf()
      return { worth: endOf(now) - endOf(after), isOpen: after.shortJ <= 0 && endOf(after) < endOf(now) - 0.05 }
    })
    if (faster === null) break
    faster.speedKmh++
    now = trackOf()
  }
  return sections
}

const endOf = (track: { atS: Float64Array }): number => track.atS[track.atS.length - 1]

/** The section whose change by one km/h is worth most; null where none is open. */
function best(
  sections: Section[],
  by: number,
  tried: (beforeKmh: number) => { worth: number; isOpen: boolean },
): Section | null {
  let found: Section | null = null
  let most = Number.NEGATIVE_INFINITY
  for (const section of sections) {
    const before = section.speedKmh
    section.speedKmh += by
    const { worth, isOpen } = tried(before)
    section.speedKmh = before
    if (!isOpen || !(worth > most)) continue
    most = worth
    found = section
  }
  return found
}

/** The speeds that sections name, whatever limits and the motor make of them. [Mps] (pieces) */
export function namedMps(pieces: number, sections: Section[]): Float64Array {
  const speedMps = new Float64Array(pieces)
  for (const { firstPiece, endPiece, speedKmh } of sections) speedMps.fill(speedKmh / 3.6, firstPiece, endPiece)
  return speedMps
}

/** The drive that sections mean, within each piece's own limit. */
function driveOf(day: DayTables, sections: Section[], waitS: Float64Array): Drive {
  return { speedMps: namedMps(day.pieces, sections).map((v, i) => Math.min(v, day.fastestMps[i])), waitS }
}

/** Even sections of each stage. */
function cut(day: DayTables, stageEnds: number[]): { firstPiece: number; endPiece: number }[] {
  const sections: { firstPiece: number; endPiece: number }[] = []
  let first = 0
  for (const end of stageEnds) {
    let lengthM = 0
    for (let i = first; i < end; i++) lengthM += day.lengthM[i]
    const parts = Math.max(Math.round(lengthM / MEANT_M), 1)
    let goneM = 0
    let from = first
    for (let i = first; i < end; i++) {
      goneM += day.lengthM[i]
      const isLast = i === end - 1
      if (!isLast && goneM < (lengthM * (sections.length - countBefore(sections, first) + 1)) / parts - 1) continue
      sections.push({ firstPiece: from, endPiece: i + 1 })
      from = i + 1
    }
    first = end
  }
  return sections
}

const countBefore = (sections: { firstPiece: number }[], piece: number): number =>
  sections.filter(({ firstPiece }) => firstPiece < piece).length

/** Speed with which a section takes as long as at the best speeds, limited pieces left out where others are free. [km/h] */
function paceKmh(day: DayTables, section: { firstPiece: number; endPiece: number }, bestMps: Float64Array): number {
  let freeM = 0
  let freeS = 0
  let fastest = 0
  for (let i = section.firstPiece; i < section.endPiece; i++) {
    fastest = Math.max(fastest, bestMps[i])
    if (bestMps[i] >= day.fastestMps[i] - 1e-6) continue
    freeM += day.lengthM[i]
    freeS += pieceS(day, i, bestMps[i]) - day.extraS[i]
  }
  return 3.6 * (freeS > 0 ? freeM / freeS : fastest)
}
