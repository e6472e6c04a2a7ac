import type { ComparedScore, SkyComparison } from '../server/documents/sky-comparison.ts'
import { dayText, grouped, round10, signed, THIN } from './format.ts'

type Place = SkyComparison['places'][number]
type Worth = NonNullable<SkyComparison['worth']>
type Id = ComparedScore['id']

/** What each measure is called, its unit, and the decimals that it is printed with. */
export const MEASURES: Record<Id, { text: string; unit: string; digits: number }> = {
  ghiWm2: { text: 'Global', unit: 'W/m²', digits: 0 },
  dniWm2: { text: 'Direct, to the sun', unit: 'W/m²', digits: 0 },
  dhiWm2: { text: 'Diffuse', unit: 'W/m²', digits: 0 },
  clearSkyIndex: { text: 'Clear-sky index', unit: '', digits: 2 },
  airTempC: { text: 'Air', unit: '°C', digits: 1 },
  windMps: { text: 'Wind', unit: 'm/s', digits: 1 },
  windAlongMps: { text: 'Wind, along', unit: 'm/s', digits: 1 },
  windAcrossMps: { text: 'Wind, across', unit: 'm/s', digits: 1 },
  pressureHpa: { text: 'Pressure', unit: 'hPa', digits: 1 },
}

/** A figure with its decimals and a true minus; a zero has no sign. */
export function decimal(value: number, digits: number): string {
  const text = Math.abs(value).toFixed(digits)
  if (digits === 0) return grouped(value)
  return value < 0 && Number(text) !== 0 ? `\u2212${text}` : text
}

/** The same, always with its sign. */
export function off(value: number, digits: number): string {
  if (digits === 0) return signed(value)
  const text = decimal(value, digits)
  return Number(value.toFixed(digits)) > 0 ? `+${text}` : text
}

/** How far a measure was off, of those listed; a dash where it was not compared. */
export function offText(scores: ComparedScore[], id: Id): string {
  const score = scores.find((one) => one.id === id)
  return score === undefined ? '–' : off(score.bias, MEASURES[id].digits)
}

/** Sun at a place in one sentence: forecast against measured over all its days. */
export function placeSentence({ name, days, rows }: Place): string {
  const [forecast, measured] = [days.map((day) => day.forecastWhm2), days.map((day) => day.measuredWhm2)].map((all) =>
    all.reduce((sum, wh) => sum + wh, 0),
  )
  const over = `over ${grouped(rows)} rows`
  if (!(measured > 0)) return `${name}: no sun was measured ${over}.`
  const pct = Math.round((forecast / measured - 1) * 100)
  const than = pct === 0 ? 'as much sun as was' : `${Math.abs(pct)}${THIN}% ${pct > 0 ? 'more' : 'less'} sun than was`
  return `${name}: the forecast had ${than} measured, ${over}.`
}

/** What the difference is worth in one sentence. */
export function worthSentence({ date, closingWh }: Pick<Worth, 'date' | 'closingWh'>): string {
  const wh = round10(closingWh)
  if (wh === 0) return `${dayText(date)}: worth nothing at the close.`
  const which = wh > 0 ? 'more' : 'less'
  return `${dayText(date)}: the forecast promised ${grouped(Math.abs(wh))}${THIN}Wh ${which} at the close than the measured sky gives.`
}
