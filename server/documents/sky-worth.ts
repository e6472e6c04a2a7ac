import { InputError } from '../engine/input-error.ts'
import type { DayBudget } from './budget.ts'
import { forecastDocuments } from './forecast.ts'
import type { ComparisonRequest, SkyWorth } from './sky-comparison.ts'
import type { SkyDocument } from './sky.ts'

type Day = NonNullable<ComparisonRequest['day']>

/**
 * What the difference of two skies is worth on a day: the day driven under both, with the charge that it opens with
 * under the forecast and at the same speeds, line by line of the ledger.
 *
 * @throws InputError when the day cannot be worked out with one of the skies
 */
export function skyWorth({ forecast, measured }: ComparisonRequest, day: Day): SkyWorth {
  const planned = named('forecast', () => drivenUnder(forecast, day))
  const { chargePct } = planned.opening
  const same = { ...day, race: openingAt(day, chargePct), speeds: heldSpeeds(day, planned) }
  const was = named('measured', () => drivenUnder(measured, same))
  return {
    date: day.date,
    car: day.car.name,
    openingPct: chargePct,
    heldKmh: planned.heldKmh,
    forecast: sideOf(planned),
    measured: sideOf(was),
    lines: linesOf(planned, was),
    closingWh: planned.closing.wh - was.closing.wh,
  }
}

/** A fault names its field as the request has it. */
function named<T>(sky: 'forecast' | 'measured', work: () => T): T {
  try {
    return work()
  } catch (error) {
    if (!(error instanceof InputError)) throw error
    const isSky = error.field.startsWith('sky.')
    throw new InputError(error.code, isSky ? error.field.replace('sky', sky) : `day.${error.field}`, error.detail)
  }
}

function drivenUnder(sky: SkyDocument, { car, race, routes, speeds, date, learned }: Day): DayBudget {
  const { days } = forecastDocuments({ car, race, routes, sky, speeds, date, learned })
  return days[days.length - 1]
}

/** The race with the day's charge as the forecast has it, so that other days leave no mark. */
const openingAt = ({ race, date }: Day, openingPct: number): Day['race'] => ({
  ...race,
  days: race.days.map((day) => (day.date === date ? { ...day, openingPct } : day)),
})

/** Speeds that follow from a target are held as the forecast gave them. */
const heldSpeeds = ({ speeds }: Day, { heldKmh }: DayBudget): Day['speeds'] =>
  speeds.kind === 'meet-target' && heldKmh !== null ? { kind: 'constant', speedKmh: heldKmh } : speeds

const sideOf = ({ ledger, closing, drivenKm }: DayBudget): SkyWorth['forecast'] => ({
  cameInWh: ledger.cameInWh,
  wentOutWh: ledger.wentOutWh,
  shortWh: ledger.shortWh,
  closingWh: closing.wh,
  closingPct: closing.chargePct,
  drivenKm,
})

const SIDES = [
  ['income', 'income'],
  ['spending', 'spendings'],
  ['denied', 'denied'],
] as const

function linesOf(planned: DayBudget, was: DayBudget): SkyWorth['lines'] {
  return SIDES.flatMap(([side, list]) => {
    const [ours, theirs] = [planned.ledger[list], was.ledger[list]]
    const extra = theirs.filter(({ id }) => ours.every((line) => line.id !== id))
    const whOf = (lines: typeof ours, id: string) => lines.find((line) => line.id === id)?.wh ?? 0
    return [...ours, ...extra].map(({ id, label }) => {
      const [forecastWh, measuredWh] = [whOf(ours, id), whOf(theirs, id)]
      return { id, label, side, forecastWh, measuredWh, differenceWh: forecastWh - measuredWh }
    })
  })
}
