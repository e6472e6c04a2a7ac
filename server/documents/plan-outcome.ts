import { holds, type Verdict } from '../engine/planner/judge.ts'

const WH = 1 / 3600

/** Seconds as people say them. */
export function spoken(seconds: number): string {
  const s = Math.max(Math.ceil(seconds), 1)
  if (s < 60) return `${s} s`
  return s % 60 === 0 ? `${s / 60} min` : `${Math.floor(s / 60)} min ${s % 60} s`
}

/**
 * What a plan comes to, in one sentence that can be read aloud.
 *
 * @param finish   where the road of the day ends
 * @param at       when the car is there, as a clock shows it
 * @param verdict  of the forecast at the plan's speeds
 * @param withinS  how much earlier any plan could be at most. [S]
 */
export function plannedText(finish: string, at: string, verdict: Verdict, withinS: number): string {
  if (holds(verdict))
    return `${finish} is reached ${at} at the earliest, and no plan can be more than ${spoken(withinS)} earlier.`
  const misses = [
    ...(verdict.lackJ > 0 ? [`${Math.ceil(verdict.lackJ * WH)} Wh short of what is wanted`] : []),
    ...(verdict.lateS > 0 ? [`${spoken(verdict.lateS)} late at a stop`] : []),
  ]
  return `No speeds were found that keep all that is wanted; the closest reach ${finish} ${at}, ${misses.join(' and ')}.`
}
