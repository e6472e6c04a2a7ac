import { z } from 'zod'
import { PACK_LIMITS } from '../engine/battery.ts'
import { skySource } from './sky.ts'

const wh = (meaning: string) => z.number().describe(`${meaning} [Wh]`)
const pct = (meaning: string) => z.number().describe(`${meaning} [% of charge]`)
const at = (meaning: string) => z.string().describe(`${meaning} (ISO 8601, local offset)`)
const km = (meaning: string) => z.number().describe(`${meaning} [km from where the day starts]`)

const balanceFields = {
  wh: wh('usable energy stored: above the weakest cell’s empty'),
  chargePct: pct('charge by coulombs, of the usable charge'),
  energyPct: z.number().describe('the same as a share of a full pack’s usable energy [% of energy]'),
}
const balance = z.strictObject(balanceFields)

const line = z.strictObject({
  id: z.string().describe('name of the line for machines'),
  label: z.string().describe('name of the line for people'),
  wh: wh('energy'),
})

/** opening + came in + short − went out = closing. What was denied stands beside it, in no sum. */
const ledger = z.strictObject({
  openingWh: wh('opening balance'),
  income: z.array(line).describe('the strings’ energy as the trackers take it, by where the car was'),
  cameInWh: wh('sum of the income'),
  spendings: z.array(line),
  wentOutWh: wh('sum of the spendings'),
  shortWh: wh('energy asked of an empty pack; above 0 the day cannot be driven so'),
  closingWh: wh('closing balance'),
  denied: z.array(line).describe('sun that window, tracking or a full pack denied; in no sum'),
})

const stageBudget = z.strictObject({
  id: z.string(),
  name: z.string(),
  start: z.string(),
  finish: z.string(),
  fromKm: km('where today’s leg starts'),
  toKm: km('where today’s leg ends'),
  drivenKm: z.number().describe('driven today [km]'),
  isFinished: z.boolean(),
  departAt: at('departure'),
  arriveAt: at('arrival at the finish, or where the clock cut the stage off'),
  departsNextAt: at('end of the stop at its finish').nullable(),
  meanKmh: z.number().describe('mean speed while driving [km/h]'),
  opening: balance,
  arrival: balance,
  closing: balance,
  ledger,
})

const gate = z.strictObject({
  kind: z.enum(['dawn', 'start', 'arrive', 'depart', 'finish', 'camp', 'dusk']),
  name: z.string().describe('place'),
  at: at('when'),
  km: km('where'),
  ...balanceFields,
})

const span = z.strictObject({
  kind: z.enum(['parked', 'morning-charge', 'drive', 'stop', 'evening-charge']),
  name: z.string().describe('place, or the stage that is driven'),
  from: at('start'),
  to: at('end'),
  fromKm: km('place at its start'),
  toKm: km('place at its end'),
})

const trackerShare = z.strictObject({
  name: z.string(),
  string: z.string(),
  inputWh: wh('taken from its string'),
  lossWh: wh('lost of what it took'),
  standbyWh: wh('drawn from the pack while it took nothing').default(0),
  deniedWh: wh('of its string’s best that its window or a full pack denied'),
  meanInputV: z.number().describe('mean voltage at its input, by energy; 0 where it took nothing [V]'),
  fell: z
    .array(
      z.strictObject({
        fromW: z.number().describe('input power from [W]'),
        toW: z.number().describe('input power to [W]'),
        wh: wh('taken at such powers'),
      }),
    )
    .describe('at which input powers the energy came'),
  limits: z
    .array(z.strictObject({ limit: z.string(), minutes: z.number(), deniedWh: wh('denied at that limit') }))
    .describe('which limit bound, how long, and what it cost'),
})

const packShare = z.strictObject({
  openingC: z.number().describe('temperature of its cells when the day opens [°C]'),
  closingC: z.number().describe('when it closes [°C]'),
  coldestC: z.number().describe('coldest of the day [°C]'),
  warmestC: z.number().describe('warmest of the day [°C]'),
  limits: z
    .array(
      z.strictObject({
        limit: z.enum(PACK_LIMITS),
        label: z.string().describe('the limit in words'),
        minutes: z.number().describe('how long it bound [min]'),
        wh: wh('refused of a charge, or withheld of what was asked'),
      }),
    )
    .describe('which of its limits bound'),
})

const column = (meaning: string) => z.array(z.number()).describe(meaning)

/** One value per step of the day, in order; a step runs from `fromMs` to the next step’s start or `toMs`. */
const series = z.strictObject({
  fromMs: column('start of the step [ms since 1970, UTC]'),
  toMs: column('end of the step [ms since 1970, UTC]'),
  km: column('place at its end [km from where the day starts]'),
  heightM: column('road height at its middle [m]'),
  speedKmh: column('speed, 0 when parked [km/h]'),
  limitKmh: column('speed limit there, 0 when parked [km/h]'),
  inW: column('taken by the trackers [W]'),
  outW: column('spent, all spendings together [W]'),
  deniedW: column('denied by window or a full pack [W]'),
  wh: column('usable energy stored at its end [Wh]'),
  chargePct: column('charge by coulombs at its end, of the usable charge [%]'),
  energyPct: column('the same as a share of a full pack’s usable energy [%]'),
  packV: column('mean pack voltage [V]'),
  packC: column('temperature of the pack’s cells at its end [°C]'),
  ghiWm2: column('global irradiance [W/m²]'),
  airTempC: column('air temperature at the road [°C]'),
  cellTempC: column('warmest panel [°C]'),
  headwindMps: column('wind against the car at its height [m/s]'),
  tiltDeg: column('tilt of the lifted array, 0 when flat [°]'),
  azimuthDeg: column('direction that the lifted array faces [°]'),
})

const outcome = z.strictObject({
  kind: z.enum([
    'done',
    'parked',
    'cut-off',
    'below-reserve',
    'runs-flat',
    'too-steep',
    'stop-missed',
    'no-speed-meets-target',
  ]),
  text: z.string().describe('one sentence for people'),
  at: at('when it happens').nullable(),
  km: km('where it happens').nullable(),
})

export const dayBudgetDocument = z.strictObject({
  date: z.string(),
  zone: z.string(),
  utcOffsetMin: z.number().describe('offset of local time when the day opens [min]'),
  outcome,
  heldKmh: z.number().nullable().describe('the one speed held all day, null where speeds differ [km/h]'),
  speedsTried: z.number().describe('speeds that were tried to meet the target; 0 where speeds were given'),
  drivenKm: z.number().describe('driven on this day [km]'),
  opening: balance,
  closing: balance,
  reserve: balance,
  capacityWh: wh('usable energy of a full pack'),
  lowest: z.strictObject({
    ...balanceFields,
    at: at('when'),
    km: km('where'),
    place: z.string(),
  }),
  marginWh: wh('lowest balance above the reserve'),
  target: balance.nullable(),
  targetMarginWh: wh('closing balance above the target').nullable(),
  ledger,
  stages: z.array(stageBudget),
  gates: z.array(gate),
  spans: z.array(span),
  trackers: z.array(trackerShare),
  pack: packShare.describe('how warm the pack was and what held it back'),
  penaltyMin: z.number().describe('penalties of this day [min]'),
  series,
})

/** What a race is expected to bring and cost, day by day. */
export const budgetDocument = z
  .strictObject({
    engineVersion: z.string(),
    race: z.string(),
    car: z.string(),
    sky: z.strictObject({ name: z.string(), source: skySource, issuedAt: z.string() }),
    assumptions: z.array(z.string()).describe('what was assumed where the documents are silent'),
    lengthKm: z.number().describe('length of the race [km]'),
    days: z.array(dayBudgetDocument),
  })
  .meta({ title: 'Budget' })

export type BudgetDocument = z.output<typeof budgetDocument>
export type DayBudget = BudgetDocument['days'][number]
export type LedgerDocument = z.output<typeof ledger>
