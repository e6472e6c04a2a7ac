import type { DayBudget } from '../server/documents/budget.ts'
import { clockOn, durationText, grouped, kmText, round10, THIN } from './format.ts'
import { printedLedger } from './ledger-lines.ts'

export interface Figure {
  text: string
  unit?: string
  /** The exact energy behind a printed figure, as the service answered it. [Wh] */
  wh?: number
}

/** A sentence as words and figures, in order. */
export type Phrase = (string | Figure)[]

type Stage = DayBudget['stages'][number]

/** What the phrase reads like aloud: plain text. */
export const spoken = (phrase: Phrase): string =>
  phrase
    .map((part) =>
      typeof part === 'string' ? part : part.unit === undefined ? part.text : `${part.text}${THIN}${part.unit}`,
    )
    .join('')

const energy = (wh: number, shownWh: number): Figure => ({ text: grouped(shownWh), unit: 'Wh', wh })
const kmh = (speed: number): Figure => ({ text: String(Math.round(speed)), unit: 'km/h' })
/** Charge by coulombs, which the crew counts; never a share of energy. */
const pct = (value: number): Figure => ({ text: grouped(value), unit: '% charge' })
const time = (day: DayBudget, at: string): Figure => ({ text: clockOn(at, day.utcOffsetMin) })

/** The one sentence of the day: what to do first, then what follows from it. */
export function daySentence(day: DayBudget): Phrase {
  switch (day.outcome.kind) {
    case 'done':
      return [...hold(day), ': ', ...reach(day), 'close the day with ', ...closing(day), ...above(day), '.']
    case 'parked':
      return ['Stay parked: close the day with ', ...closing(day), ...above(day), '.']
    case 'cut-off':
      return [...hold(day), ': ', ...cutOff(day), 'close the day with ', ...closing(day), '.']
    case 'below-reserve':
      return ['Change the plan', ...at(day), ': ', ...below(day), '.']
    case 'runs-flat':
      return ['Change the plan', ...at(day), ': ', ...flat(day), '.']
    case 'stop-missed':
      return ['Change the plan', ...at(day), ': ', ...missed(day), '.']
    case 'no-speed-meets-target':
      return ['Change the plan: no speed meets the ', day.target === null ? 'reserve' : 'target', ...nearest(day), '.']
    default:
      return ['Change the plan', ...at(day), `: ${lowerFirst(day.outcome.text)}`]
  }
}

/** The one sentence of a stage. */
export function stageSentence(day: DayBudget, stage: Stage): Phrase {
  const { closing: stored } = printedLedger({ ...stage.ledger, closingWh: stage.closing.wh })
  const arrival: Phrase = [energy(stage.arrival.wh, round10(stage.arrival.wh)), ', ', pct(stage.arrival.chargePct)]
  const speed = hold(day)
  if (!stage.isFinished)
    return [
      ...speed,
      ' towards ',
      stage.finish,
      ': the day ends at km ',
      plainKm(stage.toKm),
      ', ',
      time(day, stage.arriveAt),
    ].concat([' with ', ...arrival, '.'])
  const leave: Phrase =
    stage.departsNextAt === null
      ? []
      : ['; leave ', time(day, stage.departsNextAt), ' with ', energy(stage.closing.wh, stored.shownWh)]
  return [...speed, ' to ', stage.finish, ': arrive ', time(day, stage.arriveAt), ' with ', ...arrival, ...leave, '.']
}

/** The speed asked for, and the most that limits and motor make of it where that is less. */
function hold(day: DayBudget): Phrase {
  if (day.heldKmh === null) return ['Hold the set speeds']
  const most = day.series.speedKmh.reduce((a, b) => Math.max(a, b), 0)
  const asked: Phrase = ['Hold ', kmh(day.heldKmh)]
  return most > 0 && most < day.heldKmh - 1
    ? [...asked, ' where limits and motor allow, ', kmh(most), ' at most']
    : asked
}

const at = (day: DayBudget): Phrase => (day.heldKmh === null ? [] : [' of ', kmh(day.heldKmh)])

const plainKm = (value: number): Figure => ({ text: kmText(value) })

function reach(day: DayBudget): Phrase {
  const last = day.stages.findLast((stage) => stage.isFinished)
  return last === undefined ? [] : ['reach ', last.finish, ' ', time(day, last.arriveAt), ', ']
}

/** The printed balance, so that sentence and ledger say the same. */
function closing(day: DayBudget): Phrase {
  const { closing: stored } = printedLedger(day.ledger)
  return [energy(day.closing.wh, stored.shownWh), ', ', pct(day.closing.chargePct)]
}

/** Lowest balance above the reserve, as the difference of the two printed figures. */
export const shownMarginWh = (day: DayBudget): number => round10(day.lowest.wh) - round10(day.reserve.wh)

function above(day: DayBudget): Phrase {
  const shownWh = shownMarginWh(day)
  if (shownWh < 10) return [', down to the reserve on the way']
  return [', at least ', energy(day.marginWh, shownWh), ' above reserve']
}

/** Where the clock stops the car: on the road, or in a stop that goes on the next day. */
function cutOff(day: DayBudget): Phrase {
  const leg = day.stages.findLast((stage) => !stage.isFinished)
  if (leg === undefined) return [...reach(day), 'part of the stop is left for the next day, ']
  const where: Phrase = day.outcome.km === null ? [] : [' at km ', plainKm(day.outcome.km)]
  const when: Phrase = day.outcome.at === null ? [] : [' ', time(day, day.outcome.at)]
  return ['stop', ...when, ...where, ' before ', leg.finish, ', ']
}

function below(day: DayBudget): Phrase {
  const short = -shownMarginWh(day)
  const depth: Phrase = short < 10 ? ['to just under'] : [energy(day.marginWh, short), ' below']
  return ['the battery falls ', ...depth, ' the reserve near ', day.lowest.place, ', ', time(day, day.lowest.at)]
}

function flat(day: DayBudget): Phrase {
  const short = round10(day.ledger.shortWh)
  const lack: Phrase = short < 10 ? [] : ['; the day lacks ', energy(day.ledger.shortWh, short)]
  // A cold or hot pack, a weak cell, too much power: the service's own words say it best.
  if (/cold|hot|weakest|cannot/.test(day.outcome.text))
    return [lowerFirst(day.outcome.text.replace(/\.$/, '')), ...lack]
  const when: Phrase = day.outcome.at === null ? [] : [' at ', time(day, day.outcome.at)]
  const where: Phrase = day.outcome.km === null ? [] : [', km ', plainKm(day.outcome.km)]
  return ['the battery runs flat', ...when, ...where, ...lack]
}

function missed(day: DayBudget): Phrase {
  const at = Date.parse(day.outcome.at ?? '')
  const leg = day.stages.find((stage) => Math.abs(Date.parse(stage.arriveAt) - at) < 60_000)
  if (leg === undefined || day.outcome.at === null) return [lowerFirst(day.outcome.text.replace(/\.$/, ''))]
  return [leg.finish, ' closes before the car comes at ', time(day, day.outcome.at)]
}

/** The speed that comes nearest, and by how much it misses. */
function nearest(day: DayBudget): Phrase {
  if (day.heldKmh === null) return []
  const speed: Phrase = ['; ', kmh(day.heldKmh), ' comes nearest, ']
  const underWh = day.target === null ? 0 : round10(day.target.wh) - printedLedger(day.ledger).closing.shownWh
  if (underWh > 0) return [...speed, energy(day.targetMarginWh ?? 0, underWh), ' under it']
  const belowWh = -shownMarginWh(day)
  if (belowWh > 0) return [...speed, energy(day.marginWh, belowWh), ' below the reserve at ', day.lowest.place]
  return [...speed, 'but comes late to a stop']
}

const lowerFirst = (text: string): string => text.charAt(0).toLowerCase() + text.slice(1)

/** What another speed changes, from the answer before to this one; null where there is nothing to compare. */
export function comparison(before: DayBudget | null, now: DayBudget): string | null {
  if (before === null || before === now) return null
  const changes = [openingChange(before, now), arrivalChange(before, now), closingChange(before, now)]
  const parts = changes.filter((part) => part !== null)
  if (parts.length === 0) return null
  return `${speedChange(before, now)}: ${parts.join(', ')}`
}

function speedChange(before: DayBudget, now: DayBudget): string {
  if (before.heldKmh === null || now.heldKmh === null) return 'Against the speeds before'
  const change = Math.round(now.heldKmh - before.heldKmh)
  return change === 0 ? 'Same speed' : `${change > 0 ? '+' : '\u2212'}${Math.abs(change)}${THIN}km/h`
}

/** Other speeds on the days before leave another balance for this one. */
function openingChange(before: DayBudget, now: DayBudget): string | null {
  const wh = round10(now.opening.wh) - round10(before.opening.wh)
  return wh === 0 ? null : `open with ${grouped(Math.abs(wh))}${THIN}Wh ${wh > 0 ? 'more' : 'less'}`
}

function arrivalChange(before: DayBudget, now: DayBudget): string | null {
  const last = now.stages.findLast((stage) => stage.isFinished)
  const then = before.stages.find((stage) => stage.id === last?.id && stage.isFinished)
  if (last === undefined || then === undefined) {
    const change = now.drivenKm - before.drivenKm
    return Math.abs(change) < 0.5 ? null : `${kmText(Math.abs(change))}${THIN}km ${change > 0 ? 'further' : 'less far'}`
  }
  const minutes = Math.round((Date.parse(last.arriveAt) - Date.parse(then.arriveAt)) / 60_000)
  if (minutes === 0) return 'arrive at the same time'
  return `arrive ${durationText(minutes)} ${minutes < 0 ? 'earlier' : 'later'}`
}

function closingChange(before: DayBudget, now: DayBudget): string | null {
  const wh = printedLedger(now.ledger).closing.shownWh - printedLedger(before.ledger).closing.shownWh
  if (wh === 0) return 'the same at close'
  return `${grouped(Math.abs(wh))}${THIN}Wh ${wh > 0 ? 'more' : 'less'} at close`
}
