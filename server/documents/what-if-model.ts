import { InputError } from '../engine/input-error.ts'
import type { Change } from '../engine/planner/what-if.ts'
import { type QuickBase, quickBase, quickWhatIf } from '../engine/planner/what-if.ts'
import { channelsOf } from '../engine/tracker.ts'
import { drivenRace, type DrivenDay, wantedCharge } from './forecast.ts'
import { clock, localIso } from './local-time.ts'
import { endedBy } from './plan-camp.ts'
import type { ChangeDocument, WhatIfDocument, WhatIfRequest } from './what-if.ts'

const WH = 1 / 3600
const METHOD =
  'Approximate: the base’s tables with the change in them, refined from its speeds and prices. Plan a variant in full before you rely on it.'

/** A day planned once, to be asked again and again. */
export interface WhatIfDay {
  day: DrivenDay
  /** The best plan without any change; null where there is none. */
  base: QuickBase | null
  /** Usable charge wanted at the close, 0..1. */
  targetCharge: number
}

/**
 * The day that changes are asked of.
 *
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function whatIfDay(request: Omit<WhatIfRequest, 'variants'>): WhatIfDay {
  const day = drivenRace({ ...request, speeds: { kind: 'constant', speedKmh: 70 } }, (one) => one).days[0]
  const targetCharge = wantedCharge(day, request.targetPct)
  const race = endedBy(day, request.byTime)
  return { day, base: quickBase({ race, dayIndex: day.dayIndex, opening: day.opening, targetCharge }), targetCharge }
}

/**
 * What each change does to the best plan of a day.
 *
 * @throws InputError when a change does not fit the car
 */
export function whatIfAnswers(
  { day, base, targetCharge }: WhatIfDay,
  variants: WhatIfRequest['variants'],
): WhatIfDocument {
  const changes = variants.map(({ change }, i) => changeOf(day, change, targetCharge, `variants[${i}].change`))
  const head = { date: day.date, zone: day.zone, method: METHOD }
  if (base === null)
    return { ...head, base: null, variants: [], text: 'There is no plan for this day that anything could change.' }
  const { race, refined, forecast } = base
  const arrivalMs = race.days[day.dayIndex].opensMs + 1000 * refined.track.atS[base.reach.count]
  return {
    ...head,
    base: { arriveAt: localIso(arrivalMs, day.zone), closingWh: forecast.closingJ * WH },
    text: `Without any change the day’s road ends ${clock(arrivalMs, day.zone)} at the earliest.`,
    variants: changes.map((change, i) => {
      const { laterS, closingJ, lacksJ } = quickWhatIf(base, change)
      const holds = !Number.isNaN(laterS)
      return {
        name: variants[i].name,
        holds,
        laterMin: holds ? laterS / 60 : null,
        arriveAt: holds ? localIso(arrivalMs + 1000 * laterS, day.zone) : null,
        closingWh: holds ? closingJ * WH : null,
        lacksWh: lacksJ * WH,
      }
    }),
  }
}

/**
 * Quick answers on a day: what each change does to the best plan.
 *
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export const whatIfDocuments = ({ variants, ...request }: WhatIfRequest): WhatIfDocument =>
  whatIfAnswers(whatIfDay(request), variants)

const share = (pct: number | undefined): number => (pct ?? 100) / 100

/**
 * A change in the engine's terms.
 *
 * @param targetCharge  wanted at the close without it, 0..1
 * @throws InputError when it does not fit the car
 */
export function changeOf({ race }: DrivenDay, change: ChangeDocument, targetCharge: number, field: string): Change {
  const { massKg = 0, headwindMps = 0, openingPct = 0, stopMinutes = 0, reservePct, trackerOff } = change
  const { targetPct, closePct } = change
  const closes = (targetPct === undefined ? targetCharge : targetPct / 100) + (closePct ?? 0) / 100
  const { load } = race.car
  if (load.massKg + massKg < LEAST_KG)
    throw new InputError(
      'out-of-range',
      `${field}.massKg`,
      `${massKg} given; expected at least ${(LEAST_KG - load.massKg).toFixed(0)}, which leaves ${LEAST_KG} kg`,
    )
  return {
    sun: share(change.sunPct),
    dragArea: share(change.dragAreaPct),
    rolling: share(change.rollingPct),
    massKg,
    headwindMps,
    openingCharge: openingPct / 100,
    stopS: stopMinutes * 60,
    ...(reservePct === undefined ? {} : { reserveCharge: reservePct / 100 }),
    ...(targetPct === undefined && closePct === undefined ? {} : { targetCharge: Math.min(Math.max(closes, 0), 1) }),
    ...(trackerOff === undefined ? {} : { trackerOff: trackerIndex(race, trackerOff, `${field}.trackerOff`) }),
  }
}

/** Lightest car that is looked at. [KG] */
const LEAST_KG = 50

/** Place in the list of the trackers that the balance keeps. */
function trackerIndex({ car }: DrivenDay['race'], name: string, field: string): number {
  const names = car.trackers.flatMap((tracker) => channelsOf(tracker).map((channel) => channel.name))
  const found = names.indexOf(name)
  if (found >= 0) return found
  throw new InputError('unknown-tracker', field, `${JSON.stringify(name)} given; expected one of ${names.join(', ')}`)
}
