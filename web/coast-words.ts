import type { CoastDownDocument } from '../server/documents/coast-down-result.ts'
import { grouped } from './format.ts'
import type { Figure, Phrase } from './sentence.ts'

const MINUS = '\u2212'

/** A number with so many decimals and a true minus. */
export const fixed = (value: number, decimals: number): string => value.toFixed(decimals).replace('-', MINUS)

/** Decimals that show a spread with one digit, two where the first is a 1. */
export function decimalsFor(half: number): number {
  if (!(half > 0)) return 3
  const power = Math.floor(Math.log10(half))
  const digits = half / 10 ** power < 1.95 ? 1 : 0
  return Math.min(Math.max(digits - power, 0), 8)
}

/** 0.0041 ± 0.0002: both with the digits that the spread allows. */
export function spreadText(value: number, half: number): string {
  const decimals = decimalsFor(half)
  return `${fixed(value, decimals)} ± ${half.toFixed(decimals)}`
}

type Estimate = CoastDownDocument['dragAreaM2']

/** Half of an interval that holds 95 of 100. */
export const halfOf = ({ low, high }: Estimate): number => (high - low) / 2

const estimate = (of: Estimate, unit?: string): Figure => ({
  text: spreadText(of.value, halfOf(of)),
  ...(unit === undefined ? {} : { unit }),
})

/** From this correlation on, either sign, rolling and drag are said to pull against each other. */
const STRONG = 0.8

/** The one sentence of a coast-down. */
export function coastSentence(result: CoastDownDocument): Phrase {
  const { correlation } = result
  const words = correlation < -STRONG ? '; they pull against each other: correlation ' : '; correlation '
  return [
    'Rolling ',
    estimate(result.rollingCoefficient),
    ', drag area ',
    estimate(result.dragAreaM2, 'm²'),
    words,
    { text: fixed(correlation, 2) },
    '.',
  ]
}

/** A ± half-width of a found value is twice its standard error, near enough for a side figure. */
const found = (value: number, sd: number): string => (sd > 0 ? spreadText(value, 2 * sd) : fixed(value, 2))

const SOURCES = { measured: 'as measured', stated: 'as stated', found: 'found from both ways' } as const

/** Wind along the road, with its side. */
export function windWords({ wind }: CoastDownDocument): { text: string; note: string } {
  const side = wind.alongMps < 0 ? 'pushing the runs there' : 'against the runs there'
  const size = found(Math.abs(wind.alongMps), wind.alongSdMps)
  return { text: size, note: `${side}, ${SOURCES[wind.source]}` }
}

/** Slope of the road, with its side. */
export function gradeWords({ grade }: CoastDownDocument): { text: string; note: string } {
  const side = grade.pct < 0 ? 'down on the way there' : 'up on the way there'
  return { text: found(Math.abs(grade.pct), grade.sdPct), note: `${side}, ${SOURCES[grade.source]}` }
}

/** What was taken out for the wind, in words; null where there was none to speak of. */
export function biasWords({ wind }: CoastDownDocument): string | null {
  if (wind.biasPct < 0.1) return null
  return `Wind squared slows both ways alike: ${fixed(wind.biasN, 2)} N, ${fixed(wind.biasPct, 1)} % of rolling, is taken out.`
}

/** The linear rolling term that was held or found; null where there is none. */
export function linearWords({ rollingPerKmh }: CoastDownDocument): string | null {
  if (rollingPerKmh.value === 0) return null
  const how = rollingPerKmh.isHeld ? 'held at' : 'found at'
  return `Rolling is that at rest; its rise with speed is ${how} ${rollingPerKmh.value.toPrecision(2)} per km/h.`
}

/** The road load in calm reference air as a formula of the speed in km/h. */
export function loadWords({ reference }: CoastDownDocument): string {
  const { F0N, F1NPerKmh, F2NPerKmh2 } = reference
  const linear = F1NPerKmh === 0 ? '' : ` + ${F1NPerKmh.toPrecision(3)}·v`
  return `${fixed(F0N, 2)}${linear} + ${F2NPerKmh2.toPrecision(3)}·v²`
}

/** What a run shows, for its picture: 82 → 14 km/h in 215 s, 44 rows. */
export function runWords({ fromKmh, toKmh, timeS, rows }: CoastDownDocument['runs'][number]): string {
  const span = `${grouped(fromKmh)} to ${grouped(toKmh)} km/h`
  return `${span} in ${grouped(timeS[timeS.length - 1])} s, ${grouped(rows)} rows`
}
