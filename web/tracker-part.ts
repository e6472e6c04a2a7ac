import type { PartOfDay, TrackerDayWork, TrackerWork } from './crew-types.ts'
import { clock, grouped, THIN } from './format.ts'

/** Time outside the window over a part of the day; a full pack is no edge of it. [min] */
export const outsideMinutes = ({ edges }: PartOfDay): number =>
  edges.reduce((sum, { limit, minutes }) => sum + (limit === 'full' ? 0 : minutes), 0)

/** What the window cost over a part. [Wh] */
export const outsideWh = ({ edges }: PartOfDay): number =>
  edges.reduce((sum, { limit, deniedWh }) => sum + (limit === 'full' ? 0 : deniedWh), 0)

/** Minutes as the screens print them: under ten with one decimal; less than a tenth is said so. */
export function minutesText(minutes: number): string {
  if (minutes < 0.05) return '0'
  return minutes < 9.95 ? minutes.toFixed(1) : grouped(minutes)
}

/** Time that energy is worth: seconds under a minute. */
export const worthText = (minutes: number): string =>
  Math.abs(minutes) < 1 ? `${grouped(minutes * 60)}${THIN}s` : `${minutesText(minutes)}${THIN}min`

/** Energy of one tracker: under ten with one decimal. */
export const smallWh = (wh: number): string => (wh >= 9.95 || wh < 0.05 ? grouped(wh) : wh.toFixed(1))

const KINDS: Record<PartOfDay['kind'], string> = {
  day: 'Whole day',
  parked: 'Parked',
  'morning-charge': 'Morning charge',
  drive: '',
  stop: 'stop',
  'evening-charge': 'Evening charge',
}

/** Name of a part of the day with its hours. */
export function partText(part: PartOfDay): string {
  if (part.kind === 'day') return KINDS.day
  const name = part.kind === 'drive' ? part.name : part.kind === 'stop' ? `${part.name} stop` : KINDS[part.kind]
  return `${name}, ${clock(part.from)}–${clock(part.to)}`
}

/** Each edge that bound over a part: what it is, how long, what it cost. */
export const edgeTexts = ({ edges }: PartOfDay): string[] =>
  edges.map(
    ({ label, effect, minutes, deniedWh }) =>
      `${label.charAt(0).toUpperCase()}${label.slice(1)}: ${effect}, ${minutesText(minutes)}${THIN}min, ${smallWh(deniedWh)}${THIN}Wh`,
  )

/** What a minute costs, and how that is known. */
export const priceText = ({ whPerMin, how }: TrackerDayWork['price']): string =>
  whPerMin === null ? how : `A minute less on the road costs ${grouped(whPerMin)}${THIN}Wh. ${how}`

/** The tracker of a report in the day driven again; null where that is not known. */
export const workOf = (name: string, work: TrackerDayWork | null): TrackerWork | null =>
  work?.trackers.find((tracker) => tracker.name === name) ?? null

/** What keeps the string in: the hatch of the chart in words. */
export const hatchText = ({ leastRiseV, lowestV, highestV }: TrackerWork): string =>
  `Volts of pack and string. Hatched: ${leastRiseV > 0 ? `less than ${grouped(leastRiseV)}${THIN}V below the pack` : 'above the pack'}, or outside ${grouped(lowestV)}–${grouped(highestV)}${THIN}V.`
