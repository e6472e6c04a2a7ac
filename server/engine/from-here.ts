import type { ChargingWindow, DayRules, StageRule } from './day-rules.ts'
import type { Opening, Race } from './forecast.ts'

/** A place, time and charge in the middle of a day. */
export interface Here extends Opening {
  atMs: number
}

/**
 * A race whose day begins at an instant: what is left of its hours, windows and of the stop being stood in.
 *
 * A car that has stood in a stop or a window from its start has its array lifted already, as far as the time since
 * then goes. On the road it keeps its speed; before the driving hours it stands.
 *
 * @returns the race with that day cut, and the opening to forecast or plan it from
 */
export function dayFrom(race: Race, dayIndex: number, here: Here): { race: Race; opening: Opening } {
  const { atMs, ...opening } = here
  const day = race.days[dayIndex]
  const { standing } = opening
  const isOnRoad = standing.stopLeftS === 0 && atMs >= day.drivingFromMs && atMs < day.drivingToMs
  return {
    race: {
      ...race,
      days: race.days.map((one, d) => (d === dayIndex ? hoursFrom(one, atMs) : one)),
      stages: race.stages.map((stage, s) => (s === standing.stage - 1 ? stoodIn(stage, standing.stopLeftS) : stage)),
    },
    opening: { ...opening, standing: { ...standing, speedMps: isOnRoad ? (standing.speedMps ?? 0) : 0 } },
  }
}

function hoursFrom(day: DayRules, atMs: number): DayRules {
  const drivingToMs = Math.max(day.drivingToMs, atMs)
  return {
    ...day,
    opensMs: atMs,
    drivingFromMs: Math.max(day.drivingFromMs, atMs),
    drivingToMs,
    charging: day.charging.filter(({ toMs }) => toMs > atMs).map((window) => windowFrom(window, day.raiseS, atMs)),
  }
}

function windowFrom(window: ChargingWindow, raiseS: number, atMs: number): ChargingWindow {
  if (window.fromMs >= atMs) return window
  const stoodS = (atMs - window.fromMs) / 1000
  return { ...window, fromMs: atMs, raiseS: Math.max((window.raiseS ?? raiseS) - stoodS, 0) }
}

function stoodIn(stage: StageRule, leftS: number): StageRule {
  if (stage.stop === null || leftS === 0) return stage
  const stoodS = Math.max(stage.stop.lengthS - leftS, 0)
  return { ...stage, stop: { ...stage.stop, raiseS: Math.max(stage.stop.raiseS - stoodS, 0) } }
}
