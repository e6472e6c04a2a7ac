import { grouped, signed, THIN } from './format.ts'
import { type Moved, SLIDERS, sliderText } from './phone/what-if-form.ts'
import type { ArrivalCause, EnergyCause, VariantAnswer } from './variant-types.ts'

const LONGEST_NAME = 80

/** What the sliders stand at, as the name of a variant: Sun 90 %, Headwind +2 m/s. */
export function changesText(moved: Moved): string {
  const texts = SLIDERS.flatMap((slider) => {
    const value = moved[slider.field]
    const [name] = slider.label.split(',')
    return value === undefined ? [] : [`${name} ${sliderText(slider, value)}`]
  })
  const text = texts.join(', ').replaceAll(THIN, ' ')
  return text.length <= LONGEST_NAME ? text : `${texts[0]} and ${texts.length - 1} more`.replaceAll(THIN, ' ')
}

/** Later or earlier than the plan, to the minute: 12 min later, as early. */
export function laterText(laterMin: number): string {
  const whole = Math.round(Math.abs(laterMin))
  if (whole === 0) return 'as early'
  const text =
    whole < 60 ? `${whole}${THIN}min` : `${Math.floor(whole / 60)}${THIN}h ${String(whole % 60).padStart(2, '0')}`
  return `${text} ${laterMin > 0 ? 'later' : 'earlier'}`
}

/** A part of a difference in time, signed, to a tenth of a minute: +5.9, −0.1, 0. */
export function minText(min: number): string {
  const tenths = Math.round(min * 10)
  if (tenths === 0) return '0'
  return `${tenths > 0 ? '+' : '\u2212'}${(Math.abs(tenths) / 10).toFixed(1)}`
}

/** Changes whose part prints as more than 0, with the printed parts together. [min] */
export function minuteRows(causes: ArrivalCause[]): { rows: ArrivalCause[]; sumMin: number } {
  const tenths = (min: number): number => Math.round(min * 10)
  const rows = causes.filter(({ min }) => tenths(min) !== 0)
  return { rows, sumMin: rows.reduce((sum, { min }) => sum + tenths(min), 0) / 10 }
}

/** A line of the ledger at the plan's speeds and at the variant's own. */
export interface CauseRow {
  id: string
  label: string
  /** Null where there is none. [Wh] */
  heldWh: number | null
  ownWh: number | null
}

/** Lines that print as more than 0 somewhere, the largest first. */
export function causeRows({
  atBaseSpeeds,
  energyCauses,
}: Pick<VariantAnswer, 'atBaseSpeeds' | 'energyCauses'>): CauseRow[] {
  const held = atBaseSpeeds?.causes ?? []
  const own = energyCauses ?? []
  const ids = [...new Set([...held, ...own].map(({ id }) => id))]
  const of = (causes: EnergyCause[], id: string): number | null => causes.find((one) => one.id === id)?.wh ?? null
  return ids
    .map((id) => ({
      id,
      label: [...held, ...own].find((one) => one.id === id)?.label ?? id,
      heldWh: of(held, id),
      ownWh: of(own, id),
    }))
    .filter(({ heldWh, ownWh }) => Math.round(heldWh ?? 0) !== 0 || Math.round(ownWh ?? 0) !== 0)
    .sort((a, b) => size(b) - size(a))
}

const size = ({ heldWh, ownWh }: CauseRow): number => Math.max(Math.abs(heldWh ?? 0), Math.abs(ownWh ?? 0))

/** The printed parts of a difference together, so that a column adds up as it stands. [Wh] */
export const printedSum = (values: (number | null)[]): number =>
  values.reduce<number>((sum, wh) => sum + Math.round(wh ?? 0), 0)

/** A difference of energy, signed: +310, −84, 0; a dash where there is none. */
export const differenceText = (wh: number | null): string => (wh === null ? '–' : signed(wh))

/** Least battery over the reserve and closing balance over what is wanted, in one sentence. */
export function marginText({ figures }: VariantAnswer): string {
  if (figures === null) return ''
  const { leastSpareWh, overTargetWh } = figures
  const spare =
    leastSpareWh < -0.5
      ? `Falls ${grouped(-leastSpareWh)}${THIN}Wh below the reserve`
      : `Stays ${grouped(leastSpareWh)}${THIN}Wh over the reserve`
  const over =
    overTargetWh < -0.5
      ? `closes ${grouped(-overTargetWh)}${THIN}Wh short of what is wanted`
      : `closes ${grouped(overTargetWh)}${THIN}Wh over what is wanted`
  return `${spare}, ${over}.`
}

type Json = unknown
const isObject = (value: Json): value is Record<string, Json> =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

/**
 * The merge patch that makes one document of another.
 *
 * @source RFC 7386, JSON Merge Patch: null takes a field away, objects are merged, all else replaces
 */
export function patchBetween(own: Json, other: Json): Record<string, Json> {
  const [from, to] = [isObject(own) ? own : {}, isObject(other) ? other : {}]
  const patch: Record<string, Json> = {}
  for (const name of Object.keys(from)) if (!(name in to)) patch[name] = null
  for (const [name, value] of Object.entries(to)) {
    const before = from[name]
    if (JSON.stringify(before) === JSON.stringify(value)) continue
    patch[name] = isObject(before) && isObject(value) ? patchBetween(before, value) : value
  }
  return patch
}
