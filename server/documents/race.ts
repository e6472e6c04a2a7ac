import { z } from 'zod'
import { horizon } from './horizon.ts'
import { count, date, label, quantity, slug, timeOfDay, withSeconds, zoneName } from './quantity.ts'
import { turbidityByMonth } from './turbidity.ts'

const isBefore = (one: string, other: string): boolean => withSeconds(one) < withSeconds(other)

const window = z
  .strictObject({ from: timeOfDay('start, local time'), to: timeOfDay('end, local time') })
  .refine((w) => isBefore(w.from, w.to), { path: ['to'], error: 'later than from' })

const chargingWindow = z
  .strictObject({
    from: timeOfDay('start, local time'),
    to: timeOfDay('end, local time'),
    lift: z.boolean().describe('whether the array may be lifted to the sun').default(true),
    horizon,
  })
  .refine((w) => isBefore(w.from, w.to), { path: ['to'], error: 'later than from' })

const stop = z
  .strictObject({
    minutes: quantity(0, 600, 'length of the stop [min]'),
    zone: zoneName('time zone of the stop, where it differs from the day’s; its hours are local to it').optional(),
    opensAt: timeOfDay('when the stop opens, local time').optional(),
    closesAt: timeOfDay('latest arrival, local time').optional(),
    clockStarts: z
      .enum(['on-arrival', 'at-opening'])
      .describe('for a car that comes before the stop opens: whether its minutes run from arrival or from the opening')
      .default('on-arrival'),
    lift: z.boolean().describe('whether the array may be lifted to the sun').default(true),
    raiseMin: quantity(0, 60, 'minutes to lift the array').default(2),
    lowerMin: quantity(0, 60, 'minutes to lower it again').default(2),
    horizon,
  })
  .refine((s) => s.opensAt === undefined || s.closesAt === undefined || isBefore(s.opensAt, s.closesAt), {
    path: ['closesAt'],
    error: 'later than opensAt',
  })

const stage = z
  .strictObject({
    id: slug('name of the stage for machines, unique in the race'),
    name: label('name of the stage for people'),
    route: slug('route that the stage runs on'),
    fromKm: quantity(0, 50_000, 'where on the route it starts [km]').default(0),
    toKm: quantity(0, 50_000, 'where on the route it ends; left out: at the end [km]').optional(),
    start: label('place where it starts'),
    finish: label('place where it ends'),
    stop: stop.optional().describe('the timed stop at its finish, before the next stage'),
  })
  .refine((s) => s.toKm === undefined || s.toKm > s.fromKm, { path: ['toKm'], error: 'more than fromKm' })

const charge = (meaning: string) => quantity(0, 100, meaning)

/** What may be measured when a day opens; a rested voltage stands for a charge. */
const measured = {
  openingRestV: quantity(1, 2500, 'in place of a charge: voltage of the rested pack at its terminals [V]').optional(),
  openingRestMin: quantity(0, 10_000, 'how long it had rested then; left out: taken for rested [min]').optional(),
  openingMeterPct: quantity(0, 10, 'how far that voltmeter may be off, either way; left out: 0.5 [%]').optional(),
  openingPackC: quantity(
    -40,
    90,
    'temperature of the pack then; left out: the air’s, or the night before [°C]',
  ).optional(),
}

/** What was measured when a day opens, as race and day give it. */
export interface Measured {
  openingPct?: number
  openingRestV?: number
  openingRestMin?: number
  openingMeterPct?: number
  openingPackC?: number
}

type Complain = (path: (string | number)[], message: string, input: unknown) => void

/** A charge or a voltage, not both; what belongs to a voltage only with one. */
function checkOpening(given: Measured, complain: Complain): void {
  const { openingPct, openingRestV } = given
  if (openingPct !== undefined && openingRestV !== undefined)
    complain(['openingRestV'], `left out where openingPct is given (${openingPct})`, openingRestV)
  if (openingRestV !== undefined) return
  for (const name of ['openingRestMin', 'openingMeterPct'] as const)
    if (given[name] !== undefined) complain([name], 'left out where there is no openingRestV', given[name])
}

const day = z
  .strictObject({
    date: date('day of the calendar at the place of the race'),
    zone: zoneName('time zone of this day, where it differs from the race').optional(),
    release: timeOfDay('when the car leaves impound, local time').optional(),
    driving: window.describe('driving hours, local time'),
    charging: z.array(chargingWindow).max(6).default([]).describe('when a parked car may charge'),
    raiseMin: quantity(0, 60, 'minutes to lift the array in a charging window').default(2),
    lowerMin: quantity(0, 60, 'minutes to lower it again').default(2),
    impound: timeOfDay('when the car is locked away, local time').optional(),
    openingPct: charge(
      'measured charge at the start of the day, of the usable charge, where it is known [%]',
    ).optional(),
    ...measured,
    targetPct: charge('charge wanted when the day ends, of the usable charge [%]').optional(),
    stages: z.array(stage).max(30).default([]).describe('stages that may start on this day'),
  })
  .superRefine((d, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    checkOpening(d, issue)
    d.charging.forEach((w, i) => {
      if (d.release !== undefined && isBefore(w.from, d.release))
        issue(['charging', i, 'from'], `not before the release (${d.release})`, w.from)
      if (d.impound !== undefined && isBefore(d.impound, w.to))
        issue(['charging', i, 'to'], `not after the impound (${d.impound})`, w.to)
      if (i > 0 && isBefore(w.from, d.charging[i - 1].to))
        issue(['charging', i, 'from'], `not before the window before it ends (${d.charging[i - 1].to})`, w.from)
    })
    if (d.release !== undefined && isBefore(d.driving.from, d.release))
      issue(['driving', 'from'], `not before the release (${d.release})`, d.driving.from)
    if (d.impound !== undefined && isBefore(d.impound, d.driving.to))
      issue(['driving', 'to'], `not after the impound (${d.impound})`, d.driving.to)
  })

/** The rules and the days of a race; every rule is a parameter here, none is in the code. */
export const raceDocument = z
  .strictObject({
    name: label('name of the race'),
    zone: zoneName('time zone of the race, for example Africa/Windhoek'),
    openingPct: charge('charge of the pack when the first day opens, of the usable charge [%]').optional(),
    ...measured,
    days: z.array(day).min(1).max(40),
    turbidityByMonth: turbidityByMonth.optional(),
    penalties: z
      .strictObject({
        lateMinPerMin: quantity(0, 1000, 'penalty minutes per minute that a stop is reached after it closes').default(
          0,
        ),
        unfinishedMinPerKm: quantity(0, 1000, 'penalty minutes per km not driven when the last day ends').default(0),
        lateFreeMin: quantity(0, 10_000, 'minutes after the closing that cost nothing, at each stop [min]').default(0),
        mostLatePenaltyMin: quantity(0, 100_000, 'most penalty for one late arrival [min]').optional(),
        earlyMinPerMin: quantity(0, 1000, 'penalty minutes per minute that a stop is reached before it opens').default(
          0,
        ),
        mostLateMin: count(
          0,
          10_000,
          'latest arrival after the closing that is still counted; left out: the free minutes [min]',
        ).optional(),
      })
      .default({ lateMinPerMin: 0, unfinishedMinPerKm: 0, lateFreeMin: 0, earlyMinPerMin: 0 }),
  })
  .superRefine((race, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    checkOpening(race, issue)
    if (race.openingPct === undefined && race.openingRestV === undefined)
      issue(['openingPct'], 'a number, or openingRestV', undefined)
    const seen = new Set<string>()
    race.days.forEach((d, i) => {
      if (i > 0 && d.date <= race.days[i - 1].date)
        issue(['days', i, 'date'], `a day after the one before it (${race.days[i - 1].date})`, d.date)
      d.stages.forEach((s, j) => {
        if (seen.has(s.id)) issue(['days', i, 'stages', j, 'id'], 'an id used once in the race', s.id)
        seen.add(s.id)
      })
    })
    if (seen.size === 0) issue(['days', 0, 'stages'], 'at least one stage in the race', 0)
  })
  .meta({ title: 'Race' })

export type RaceDocument = z.output<typeof raceDocument>
export type RaceInput = z.input<typeof raceDocument>
export type Penalties = RaceDocument['penalties']
export type DayDocument = RaceDocument['days'][number]
export type StageDocument = DayDocument['stages'][number]
