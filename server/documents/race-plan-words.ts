import type { Verdict } from '../engine/planner/judge.ts'
import { holds } from '../engine/planner/judge.ts'
import { plannedText, spoken } from './plan-outcome.ts'
import type { RacePlanDay, RacePlanDocument } from './race-plan.ts'
import { clockOf, dayName } from './local-time.ts'

type Close = RacePlanDay['close']

/** Prices that differ by less are the same. */
const SAME_PRICE = 0.05
/** Below it a watt-hour saves nothing that anyone notices. [s/Wh] */
const NO_PRICE = 0.05
/** A pack this full takes no more over the night. [%] */
const FULL_PCT = 97
/** This near to the reserve it holds no less. [%] */
const NEAR_PCT = 1

const whole = (pct: number): string => `${Math.round(pct)} %`

/** Hours and minutes on the road. */
export function hoursText(min: number): string {
  const minutes = Math.round(min)
  return minutes < 60 ? `${minutes} min` : `${Math.floor(minutes / 60)} h ${String(minutes % 60).padStart(2, '0')} min`
}

/** A cost to the second where seconds count. */
const costText = (min: number): string => (min < 10 ? spoken(min * 60) : hoursText(min))

/** A driven day in one sentence. */
export function drivenText(
  on: { date: string; finish: string; at: string; drivingMin: number; closingPct: number },
  verdict: Verdict,
): string {
  const { date, finish, at, drivingMin, closingPct } = on
  if (!holds(verdict)) return `${dayName(date)}: ${plannedText(finish, at, verdict, 0)}`
  return `${dayName(date)}: ${finish} ${at} after ${hoursText(drivingMin)}, closing with ${whole(closingPct)}.`
}

/** What a closing charge does to the days around it. */
export function closeText(close: Omit<Close, 'text'>, of: { isLast: boolean; reservePct: number }): string {
  if (close.kind === 'reserve') return reserveText(close)
  if (close.kind === 'found') return foundText(close, of.reservePct)
  const by = close.kind === 'race' ? 'by the race' : 'by this order'
  const fixed = `Fixed ${by} at ${whole(close.wanted.chargePct)}`
  if (close.costMin === null || close.freePct === null)
    return `${fixed}. What that costs is not known: a day beside it has no plan that keeps everything.`
  if (close.costMin * 60 < 1) return `${fixed}: it costs nothing.`
  const free = of.isLast ? 'the reserve' : `${whole(close.freePct)}, which this night would have if it were free`
  return `${fixed}: it costs ${costText(close.costMin)} against ${free}.`
}

function reserveText({ closing, wanted }: Omit<Close, 'text'>): string {
  if (closing === null || closing.chargePct - wanted.chargePct < NEAR_PCT)
    return 'The last day may use everything down to the reserve.'
  return `The last day closes with ${whole(closing.chargePct)}, over the reserve: energy does not hold it back.`
}

function foundText({ closing, wanted, eveningSPerWh, morningSPerWh }: Omit<Close, 'text'>, reservePct: number): string {
  const found = `Found: ${whole(closing?.chargePct ?? wanted.chargePct)}.`
  if (closing === null || eveningSPerWh === null || morningSPerWh === null) return found
  const [dearer, cheaper] = [Math.max(eveningSPerWh, morningSPerWh), Math.min(eveningSPerWh, morningSPerWh)]
  if (dearer < NO_PRICE) return `${found} Energy holds neither day back.`
  const prices = `${found} A watt-hour saves ${eveningSPerWh.toFixed(1)} s on this day and ${morningSPerWh.toFixed(1)} s on the next`
  if (dearer - cheaper < SAME_PRICE * dearer)
    return `${prices}: the same, so carrying more or less over this night gains nothing.`
  if (morningSPerWh > eveningSPerWh && closing.chargePct >= FULL_PCT)
    return `${prices}, but a full pack carries no more over this night.`
  if (eveningSPerWh > morningSPerWh && closing.chargePct - reservePct < NEAR_PCT)
    return `${prices}, but the reserve allows no less over this night.`
  return `${prices}: a limit of the pack lies between them.`
}

/** What the whole race comes to. */
export function raceText(
  plan: Pick<RacePlanDocument, 'drivingMin' | 'days'>,
  kind: RacePlanDocument['outcome']['kind'],
): string {
  const { days, drivingMin } = plan
  if (kind === 'impossible') return days.find(({ state }) => state === 'impossible')?.text ?? ''
  const driven = days.filter(({ road }) => road !== null)
  const last = driven[driven.length - 1]
  if (last === undefined) return 'Nothing is driven on these days.'
  const onTheRoad = `${hoursText(drivingMin)} on the road in ${driven.length === 1 ? 'one day' : `${driven.length} days`}, stops included`
  const short = driven.filter(({ road }) => road?.keepsAll === false).map(({ date }) => dayName(date))
  const but = short.length === 0 ? '' : ` Not all that is wanted is kept on ${short.join(', ')}.`
  if (kind === 'unfinished') return `${last.text} ${onTheRoad}.${but}`
  const at = clockOf(last.road?.arriveAt ?? '')
  return `${last.to} is reached on ${dayName(last.date)} at ${at}: ${onTheRoad}.${but}`
}
