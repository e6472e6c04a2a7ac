import type { RaceInput } from '../server/documents/race.ts'

/** A stop as it is typed: texts, so that a half-typed number is no error yet. */
export interface StopForm {
  name: string
  km: string
  minutes: string
}

export interface WindowForm {
  from: string
  to: string
}

/** A race day as it is typed. */
export interface RaceForm {
  name: string
  date: string
  zone: string
  route: string
  start: string
  finish: string
  driving: WindowForm
  charging: WindowForm[]
  openingPct: string
  targetPct: string
  stops: StopForm[]
}

/** An empty form for a day at a zone. */
export const emptyRace = (date: string, zone: string, route: string): RaceForm => ({
  name: '',
  date,
  zone,
  route,
  start: 'Start',
  finish: 'Finish',
  driving: { from: '08:30', to: '17:00' },
  charging: [
    { from: '06:30', to: '08:30' },
    { from: '17:00', to: '18:30' },
  ],
  openingPct: '90',
  targetPct: '',
  stops: [],
})

type Stage = NonNullable<RaceInput['days'][number]['stages']>[number]

/** The race document that a form describes: one stage between every two places. */
export function raceOf(form: RaceForm): RaceInput {
  return {
    name: form.name,
    zone: form.zone,
    openingPct: numberOf(form.openingPct),
    days: [
      {
        date: form.date,
        driving: form.driving,
        charging: form.charging.filter((window) => window.from !== '' && window.to !== ''),
        ...(form.targetPct.trim() === '' ? {} : { targetPct: numberOf(form.targetPct) }),
        stages: stagesOf(form),
      },
    ],
  }
}

function stagesOf(form: RaceForm): Stage[] {
  const stops = [...form.stops].sort((a, b) => numberOf(a.km) - numberOf(b.km))
  return [...stops, null].map((stop, i): Stage => {
    const from = i === 0 ? null : stops[i - 1]
    return {
      id: `stage-${i + 1}`,
      name: `Stage ${i + 1}`,
      route: form.route,
      ...(from === null ? {} : { fromKm: numberOf(from.km) }),
      ...(stop === null ? {} : { toKm: numberOf(stop.km) }),
      start: from === null ? form.start : from.name,
      finish: stop === null ? form.finish : stop.name,
      ...(stop === null ? {} : { stop: { minutes: numberOf(stop.minutes) } }),
    }
  })
}

/** A typed number with a decimal point or comma. */
const numberOf = (text: string): number => Number(text.replace(',', '.'))

export interface Lack {
  field: string
  detail: string
}

/** What the form still lacks before it is worth sending. */
export function lacksOf(form: RaceForm): Lack[] {
  const lacks: Lack[] = []
  const need = (isThere: boolean, field: string, detail: string): void => {
    if (!isThere) lacks.push({ field, detail })
  }
  need(form.name.trim() !== '', 'Name', 'a name for the race')
  need(form.route !== '', 'Route', 'a stored route; add one below')
  need(/^\d{4}-\d{2}-\d{2}$/.test(form.date), 'Date', 'a date')
  need(isNumber(form.openingPct), 'Opening charge', 'a number from 0 to 100')
  need(form.targetPct.trim() === '' || isNumber(form.targetPct), 'Target', 'a number from 0 to 100, or nothing')
  form.stops.forEach((stop, i) => {
    need(stop.name.trim() !== '', `Stop ${i + 1}`, 'a name')
    need(isNumber(stop.km), `Stop ${i + 1}`, 'its kilometre on the route')
    need(isNumber(stop.minutes), `Stop ${i + 1}`, 'its minutes')
  })
  return lacks
}

const isNumber = (text: string): boolean => text.trim() !== '' && Number.isFinite(Number(text.replace(',', '.')))
