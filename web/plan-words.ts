import { clock, clockAt, durationText, grouped, offsetMinOf, THIN, whText } from './format.ts'
import type { PlanDocument, PlanEntry, Planned } from './plan-types.ts'

type Ranges = NonNullable<PlanDocument['ranges']>
type Section = Planned['forPeople']['sections'][number]

/** A chance as a crew counts it: never finer than 1 in 100, and never certain. */
export function chanceText(pct: number): string {
  const whole = Math.round(pct)
  if (whole < 1) return 'under 1 in 100'
  return whole > 99 ? 'over 99 in 100' : `${whole} in 100`
}

/** A length of time to the second under ten minutes: 4 s, 1 min 39 s, 21 min, 1 h 05 min. */
export function lengthText(minutes: number): string {
  const s = Math.round(Math.abs(minutes) * 60)
  if (s < 60) return `${s}${THIN}s`
  if (s >= 600) return durationText(s / 60)
  return s % 60 === 0 ? `${s / 60}${THIN}min` : `${Math.floor(s / 60)}${THIN}min ${s % 60}${THIN}s`
}

/** The service's sentence with its figures kept beside their units. */
export const tight = (text: string): string => text.replace(/(\d) (?=(?:s|min|%|Wh)(?![a-z]))/g, `$1${THIN}`)

export const isPlanned = (plan: PlanDocument): plan is Planned => plan.best !== null && plan.forPeople !== null

/** How the plan stands against the best, and against one speed held all day. */
export function meritTexts({ forPeople, constant, bound }: Planned): string[] {
  const later =
    forPeople.costMin * 60 < 0.5
      ? 'Speeds for people arrive as early as the best speeds found.'
      : `Speeds for people arrive ${lengthText(forPeople.costMin)} later than the best speeds found.`
  const best = bound === null ? [] : [`No plan can be more than ${boundText(bound.withinMin)} earlier than the best.`]
  if (constant === null) return [later, ...best, 'No constant speed meets the target.']
  const gainMin = constant.laterMin - forPeople.costMin
  const speed = `${grouped(constant.speedKmh)}${THIN}km/h`
  const against =
    gainMin * 60 < 0.5
      ? `The fastest constant speed, ${speed}, arrives as early.`
      : `That is ${lengthText(gainMin)} earlier than the fastest constant speed, ${speed}.`
  return [later, against, ...best]
}

/** A bound to the full second above, and never none. */
const boundText = (withinMin: number): string => lengthText(Math.max(Math.ceil(withinMin * 60), 1) / 60)

/** Neighbours whose prices differ by less are one. */
const SAME_PRICE = 0.02
/** A loss that a crew knows. [Wh] */
const KNOWN_WH = 60

export interface PriceRun {
  fromKm: number
  sPerWh: number
}

/** Where the price of energy changes along the road. */
export function priceRuns(prices: PlanDocument['prices']): PriceRun[] {
  const runs: PriceRun[] = []
  for (const { km, sPerWh } of prices) {
    const last = runs[runs.length - 1]
    if (last === undefined || Math.abs(sPerWh - last.sPerWh) > SAME_PRICE * Math.max(sPerWh, last.sPerWh))
      runs.push({ fromKm: km, sPerWh })
  }
  return runs
}

/** The price of energy in plain words. */
export function priceText({ sPerWh }: PriceRun): string {
  if (sPerWh < 0.05) return 'Energy does not hold this plan back: a watt-hour more saves no time.'
  return `A watt-hour saves ${sPerWh.toFixed(1)}${THIN}s; ${KNOWN_WH}${THIN}Wh cost ${lengthText((KNOWN_WH * sPerWh) / 60)}.`
}

/** What a want costs; null where it costs nothing. */
export const limitText = ({ costMin }: PlanDocument['limits'][number]): string =>
  costMin * 60 < 0.5 ? 'nothing' : lengthText(costMin)

/** Arrival with its likely range, as local times. */
export function arrivalRange(arriveAt: string, { lateMin }: Ranges): { earliest: string; latest: string } {
  const at = (min: number): string => clockAt(Date.parse(arriveAt) + min * 60_000, offsetMinOf(arriveAt))
  return { earliest: at(lateMin.p10), latest: at(lateMin.p90) }
}

/** Two energies as a range to 10 Wh; below 0 the battery would have given more than it holds. */
export function whRange({ p10, p90 }: { p10: number; p90: number }): string {
  if (p90 < 0) return 'below 0'
  return p10 < 0 ? `below 0 to ${whText(p90)}` : `${whText(p10)}–${whText(p90)}`
}

/** Where one day in ten, or more, would empty the battery at the plan's speeds; null where none does. */
export function flatText({ closingWh, gates }: Ranges): string | null {
  const gate = gates.find(({ wh }) => wh.p10 < 0)
  if (gate === undefined && closingWh.p10 >= 0) return null
  const place = gate === undefined ? 'the close' : gate.name
  return `Below 0: on 1 day in 10, or more, these speeds empty the battery before ${place}; drive slower then.`
}

/** Where most of the days drawn that touch the reserve come lowest. */
export function touchPlace({ touchesMostKm: km, gates }: Ranges): string {
  if (km === null) return 'nowhere on the days drawn'
  const gate = gates.find((one) => Math.abs(one.km - km) < 1 && !one.name.startsWith('km '))
  return `most often ${gate === undefined ? 'near' : `at ${gate.name},`} km ${grouped(km)}`
}

/** Neighbouring sections of one stage with the same speed, as one. */
export function mergedSections<S extends Pick<Section, 'stage' | 'fromKm' | 'toKm' | 'speedKmh'>>(sections: S[]): S[] {
  const merged: S[] = []
  for (const section of sections) {
    const last = merged[merged.length - 1]
    const isSame = last !== undefined && last.stage === section.stage && last.speedKmh === section.speedKmh
    if (isSame) merged[merged.length - 1] = { ...last, toKm: section.toKm }
    else merged.push(section)
  }
  return merged
}

/** The steady speeds to the whole km/h, by kilometre of their stage. */
export function steadySections({ steady, forPeople }: Planned): Section[] {
  if (steady === null || steady.speeds.kind !== 'sections') return []
  const nameOf = (id: string): string => forPeople.budget.stages.find((stage) => stage.id === id)?.name ?? id
  return steady.speeds.sections.map(({ stage, fromKm, toKm, speedKmh }) => ({
    stage: nameOf(stage),
    fromKm,
    toKm,
    speedKmh: Math.round(speedKmh),
  }))
}

/** What a plan that is steadier costs and keeps, or why there is none to choose. */
export function steadyText({ steady, ranges }: PlanDocument): { text: string; isOffered: boolean } {
  if (steady === null || ranges === null)
    return { text: 'No speeds were found that touch the reserve so seldom.', isOffered: false }
  const promised = `at most ${chanceText(steady.promisePct)}`
  if (ranges.touchesReservePct <= steady.promisePct)
    return {
      text: `This plan keeps the promise as it is: it touches the reserve ${chanceText(ranges.touchesReservePct)}, ${promised} is wanted.`,
      isOffered: false,
    }
  const cost = steady.costMin * 60 < 0.5 ? 'at no cost' : `${lengthText(steady.costMin)} later than the best`
  return {
    text: `To touch the reserve ${promised}, arrive ${clock(steady.arriveAt)}, ${cost}.`,
    isOffered: true,
  }
}

/** What the day wants of a plan, in a few words. */
export const wantText = (targetPct: number, { promisePct }: PlanEntry['wanted']): string =>
  `${grouped(targetPct)}${THIN}% at the close, reserve ${chanceText(promisePct)}`

/** A typed share of charge: 0 to 100, null for the race's own, undefined where it is no such number. */
export function typedPct(text: string): number | null | undefined {
  if (text.trim() === '') return null
  const pct = Number(text.replace(',', '.'))
  return pct >= 0 && pct <= 100 ? pct : undefined
}

const WHY: Record<NonNullable<PlanDocument['impossible']>['why'], string> = {
  hours: 'Even with the reserve used up the car does not come there within the driving hours.',
  reserve: 'The car would come there in time only by going below the reserve.',
  target: 'The road can be driven, but what is wanted at the close is more than the day leaves.',
}

/** Why a day cannot be planned, for somebody who is tired. */
export const whyText = ({ why }: NonNullable<PlanDocument['impossible']>): string => WHY[why]

/** The whole per cent to ask for in place of a target that cannot be met. */
export const nearestPct = (value: number): number => Math.max(Math.floor(value), 0)
