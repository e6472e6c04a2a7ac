import type { PointingDay, PointingHold, PointingWindow } from '../server/documents/pointing.ts'
import { clock, clockAt, grouped, THIN } from './format.ts'
import type { Phrase } from './sentence.ts'

/** Nearer to flat than this an azimuth means nothing. [°] */
const FLAT_DEG = 1.5
/** Nearer to the sun than this a shadow shows whether the array is square on. [°] */
const SQUARE_DEG = 3
/** Less than this from the strings is darkness for a crew. [W] */
const DARK_W = 1

export const isFlat = ({ tiltDeg }: PointingHold): boolean => tiltDeg < FLAT_DEG
export const isDark = ({ best }: PointingHold): boolean => best.stringsW < DARK_W

/** Whole degrees of a compass, 0 to 359. */
export const compassText = (deg: number): string => `${Math.round(deg) % 360}°`
export const degreesText = (deg: number): string => `${Math.round(deg)}°`

const NAMES = { 'morning-charge': 'Morning', stop: '', 'evening-charge': 'Evening' } as const

/** Morning, the place of a stop, Evening; a number where one name comes twice. */
export function windowNames(windows: PointingWindow[]): string[] {
  const names = windows.map(({ kind, name }) => NAMES[kind] || name)
  return names.map((name, i) => {
    const alike = names.flatMap((other, k) => (other === name ? [k] : []))
    return alike.length < 2 ? name : `${name} ${alike.indexOf(i) + 1}`
  })
}

/** The first of what is not over yet; the first of all where everything is. */
export function firstToCome(items: { to: string }[], atMs: number): number {
  const next = items.findIndex(({ to }) => Date.parse(to) > atMs)
  return Math.max(next, 0)
}

/** The hold to show first: of those to come the first with light. */
export function firstHold(holds: PointingHold[], atMs: number): number {
  const next = firstToCome(holds, atMs)
  const lit = holds.findIndex((hold, i) => i >= next && !isDark(hold))
  return lit < 0 ? next : lit
}

/** What to do with the array, as it could be read aloud. */
export function poseSentence(hold: PointingHold): Phrase {
  const span: Phrase = [{ text: clock(hold.from) }, ' to ', { text: clock(hold.to) }, ': ']
  if (isDark(hold)) return [...span, 'no light to speak of.']
  if (isFlat(hold)) return [...span, 'leave the array flat.']
  const turn: Phrase = ['turn to ', { text: compassText(hold.turnToDeg) }, ' true, tilt ']
  return [...span, ...turn, { text: degreesText(hold.tiltDeg) }, '.']
}

/** How to see that the array is right, or why a shadow does not tell. */
export function squareText(hold: PointingHold): string {
  if (isDark(hold)) return ''
  if (hold.offSunDeg < SQUARE_DEG) return 'Square on when a pen held upright on the array throws no shadow.'
  const off = `The best pose is ${degreesText(hold.offSunDeg)} off the sun`
  return `${off}: go by compass and tilt, not by a pen’s shadow.`
}

/** A cost to the whole watt or watt-hour, and never a gain. */
export const costText = (value: number): string => grouped(Math.max(0, value))

interface Costs {
  costW: number
  costHarvestWh: number
  costPackWh: number
}

/** What being off costs: watts in one hold, watt-hours from it on until the array comes down. */
export function costFrom(window: PointingWindow, first: number, pick: (hold: PointingHold) => Costs): Costs {
  const left = window.holds.slice(first).map(pick)
  const sum = (of: (costs: Costs) => number): number => left.reduce((total, costs) => total + of(costs), 0)
  return {
    costW: left[0].costW,
    costHarvestWh: sum(({ costHarvestWh }) => costHarvestWh),
    costPackWh: sum(({ costPackWh }) => costPackWh),
  }
}

/** How a window ends for the crew. */
export function endText({ kind }: PointingWindow): string {
  return kind === 'stop' ? 'Depart at' : 'Charge until'
}

/** Why there is nothing to point, and what to do about it. */
export const NOTHING: Record<NonNullable<PointingDay['noWindow']>, string> = {
  'no-stand': 'The car has no stand: its array stays flat. A stand is part of the car in the set-up.',
  'nothing-lifts': 'The car has a stand, but no panel of it lifts.',
  'never-lifted': 'On this day the array is lifted at no stop and in no charging window.',
}

/** Local time with UTC beside it: 13:05 UTC. */
export const utcText = (at: string): string => `${clockAt(Date.parse(at), 0)}${THIN}UTC`
