import { grouped, THIN } from './format.ts'
import { typedPct } from './plan-words.ts'
import type { NightOrder, RaceWanted } from './race-types.ts'

/** What the form says of one day's close. */
export interface NightWish {
  kind: 'race' | 'free' | 'fixed'
  text: string
}

/** The order as it stands in the form; dates left empty are the race's own. */
export interface RaceWish {
  fromDate: string
  toDate: string
  openingText: string
  nights: Record<string, NightWish>
}

/** A day of the race with its own closing charge; null where the race says none. [% of charge] */
export interface RaceDate {
  date: string
  targetPct: number | null
}

export const NO_WISH: RaceWish = { fromDate: '', toDate: '', openingText: '', nights: {} }
const AS_RACE: NightWish = { kind: 'race', text: '' }

export const nightOf = ({ nights }: RaceWish, date: string): NightWish => nights[date] ?? AS_RACE

/** The days from the first to the last that is wished for. */
export const datesIn = ({ fromDate, toDate }: RaceWish, days: RaceDate[]): RaceDate[] =>
  days.filter(({ date }) => (fromDate === '' || date >= fromDate) && (toDate === '' || date <= toDate))

/** What the form orders; null where a number or the days are wrong. */
export function wantedBy(wish: RaceWish, days: RaceDate[]): RaceWanted | null {
  const { fromDate, toDate, openingText } = wish
  const planned = datesIn(wish, days)
  const openingPct = typedPct(openingText)
  if (openingPct === undefined || planned.length === 0) return null
  const nights: NightOrder[] = []
  for (const { date } of planned) {
    const { kind, text } = nightOf(wish, date)
    if (kind === 'free') nights.push({ date, kind })
    if (kind !== 'fixed') continue
    const chargePct = typedPct(text)
    if (typeof chargePct !== 'number') return null
    nights.push({ date, kind, chargePct })
  }
  return {
    ...(fromDate === '' || fromDate === days[0].date ? {} : { fromDate }),
    ...(toDate === '' || toDate === days[days.length - 1].date ? {} : { toDate }),
    ...(openingPct === null ? {} : { openingPct }),
    nights,
  }
}

/** The form as it stood when a plan was ordered. */
export function wishOf({ fromDate = '', toDate = '', openingPct, nights }: RaceWanted): RaceWish {
  const entries = nights.map((night): [string, NightWish] => [
    night.date,
    night.kind === 'free' ? { kind: 'free', text: '' } : { kind: 'fixed', text: String(night.chargePct) },
  ])
  return {
    fromDate,
    toDate,
    openingText: openingPct === undefined ? '' : String(openingPct),
    nights: Object.fromEntries(entries),
  }
}

/** The choices for a day's close. */
export function closeOptions({ targetPct }: RaceDate, isLast: boolean): (readonly [string, string])[] {
  const free = isLast ? 'Down to the reserve' : 'Free: find it'
  const asRace =
    targetPct === null
      ? `As the race: ${isLast ? 'the reserve' : 'free'}`
      : `As the race: ${grouped(targetPct)}${THIN}%`
  return [['race', asRace] as const, ...(targetPct === null ? [] : [['free', free] as const]), ['fixed', 'Fixed at']]
}
