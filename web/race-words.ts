import { clock, dayText, durationText, grouped, THIN, whText } from './format.ts'
import type { FollowedChoice } from './crew-types.ts'
import { lengthText, tight } from './plan-words.ts'
import type { RacePlanDay, RacePlanDocument } from './race-types.ts'

export type DrivenRaceDay = RacePlanDay & { road: NonNullable<RacePlanDay['road']> }

export const isDriven = (day: RacePlanDay): day is DrivenRaceDay => day.road !== null

/** What the crew would follow on a day. */
export const chosenOn = (day: DrivenRaceDay, { carId, skyId }: Pick<FollowedChoice, 'carId' | 'skyId'>) => ({
  carId,
  skyId,
  speeds: day.road.speeds,
  until: day.camp?.until ?? null,
})

/** What is in place of a row's figures where a day is not driven. */
export function stateText({ state }: RacePlanDay): string {
  if (state === 'parked') return 'not driven'
  return state === 'impossible' ? 'cannot be done' : 'waits for the day before'
}

/** How the close came about; with what was wanted where the day closes with another charge. */
export function kindText({ close: { kind, wanted, closing } }: RacePlanDay): string {
  const isOver = closing !== null && closing.chargePct - wanted.chargePct >= 1
  if (kind === 'found') return 'found'
  if (kind === 'reserve') return isOver ? 'over reserve' : 'reserve'
  return isOver ? `given ${pctText(wanted.chargePct)}` : 'given'
}

export const isGiven = ({ close }: RacePlanDay): boolean => close.kind === 'race' || close.kind === 'order'

/** A closing charge worth a click: it is given, and costs time that people notice. */
export const isDear = (day: RacePlanDay): boolean => isGiven(day) && (day.close.costMin ?? 0) * 60 >= 1

/** More dear closes than these are counted, not named. */
const MOST_NAMED = 3

/** What the given charges cost, in one sentence. */
export function costsText({ days }: RacePlanDocument): string {
  const given = days.filter(isGiven)
  const dear = days.filter(isDear)
  const unknown = given.some(({ close }) => close.costMin === null) ? ' Of some it is not known.' : ''
  if (given.length === 0) return 'Every night closes with the charge that was found.'
  if (dear.length === 0) return `Given charges cost no time.${unknown}`
  if (dear.length > MOST_NAMED) {
    const most = Math.max(...dear.map(({ close }) => close.costMin ?? 0))
    return `Given charges cost time on ${dear.length} days: ${lengthText(most)} at most, each alone.${unknown}`
  }
  const parts = dear.map(({ date, close }) => `${dayText(date)} ${lengthText(close.costMin ?? 0)}`)
  return held(`Given charges cost time: ${parts.join(', ')}${dear.length > 1 ? ', each alone' : ''}.${unknown}`)
}

/** A sentence whose figures stay beside their units, and dates and times in one line. */
export const held = (text: string): string =>
  tight(text)
    .replace(/(\d) h (?=\d)/g, `$1${THIN}h `)
    .replace(/\b(h|min) (?=\d)/g, '$1\u00a0')
    .replace(/\b([A-Z][a-z]{2}) (\d{1,2}) ([A-Z][a-z]{2,3})\b/g, '$1\u00a0$2\u00a0$3')

/** The end of the race: when, where. */
export function finishText({ days }: RacePlanDocument): { at: string; note: string } | null {
  const last = days.filter(isDriven).pop()
  return last === undefined ? null : { at: clock(last.road.arriveAt), note: `${last.to}, ${dayText(last.date)}` }
}

/** Charges that the plan closes with where the race says something else, or nothing. */
export function otherCloses(
  { days }: RacePlanDocument,
  raceDates: { date: string; targetPct: number | null }[],
): { date: string; planPct: number; racePct: number | null }[] {
  return days.flatMap(({ date, close }) => {
    const racePct = raceDates.find((one) => one.date === date)?.targetPct ?? null
    const planPct = close.closing?.chargePct
    if (planPct === undefined || close.kind === 'reserve' || close.kind === 'race') return []
    const isSame = racePct !== null && Math.abs(racePct - planPct) < 0.5
    return isSame ? [] : [{ date, planPct, racePct }]
  })
}

/** The chart in words, for those who do not see it. */
export function raceChartText({ days, reserve }: RacePlanDocument): string {
  const closes = days.flatMap((day) =>
    day.close.closing === null
      ? []
      : [`${dayText(day.date)} closes with ${whText(day.close.closing.wh)} watt hours, ${kindText(day)}`],
  )
  return `Battery over the days and nights: ${closes.join('; ')}. Reserve ${whText(reserve.wh)} watt hours. The same as a table follows.`
}

export const pctText = (pct: number): string => `${grouped(pct)}${THIN}%`
export const roadText = (min: number): string => durationText(min)
