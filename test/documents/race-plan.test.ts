import { describe, expect, test } from 'vitest'
import { EXAMPLES } from '../../server/api/examples/all.ts'
import { twoDayRace, twoDaySky } from '../../server/api/examples/two-days.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import type { RaceInput } from '../../server/documents/race.ts'
import type { RacePlanDocument } from '../../server/documents/race-plan.ts'
import { racePlanDocuments } from '../../server/documents/race-plan-model.ts'
import { racePlanRequest } from '../../server/documents/race-plan-request.ts'
import { InputError } from '../../server/engine/input-error.ts'

const [SATURDAY, SUNDAY] = ['2026-10-17', '2026-10-18']
const EXAMPLE = EXAMPLES['race-plan-request'].document

function plan(more: object = {}): RacePlanDocument {
  const { document, problems } = checkDocument(racePlanRequest, { ...EXAMPLE, members: 50, ...more })
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return racePlanDocuments(document)
}

/** The example's race with some of a day's fields in place of its own. */
function withDay(index: number, fields: object): { race: RaceInput } {
  return { race: { ...twoDayRace, days: twoDayRace.days.map((day, d) => (d === index ? { ...day, ...fields } : day)) } }
}

const fixed = (chargePct: number) => ({ nights: [{ date: SATURDAY, kind: 'fixed', chargePct }] })

describe('two days with the night between them free', { timeout: 60_000 }, () => {
  const told: { step: string; share: number }[] = []
  const { document } = checkDocument(racePlanRequest, { ...EXAMPLE, members: 500 })
  const made = racePlanDocuments(document as NonNullable<typeof document>, (progress) => told.push(progress))
  const [first, second] = made.days

  test('have one price of energy on both sides of the night, and say what that means', () => {
    const { kind, eveningSPerWh, morningSPerWh, text, costMin } = first.close
    expect(kind).toBe('found')
    expect(costMin).toBeNull()
    expect(eveningSPerWh).toBeGreaterThan(1)
    expect(Math.abs((eveningSPerWh ?? 0) / (morningSPerWh ?? 1) - 1)).toBeLessThan(0.04)
    expect(text).toContain('the same, so carrying more or less over this night gains nothing')
  })

  // The two days differ in nothing but their dates: what costs one 10 % of charge saves the other nearly as much.
  test('share the work: each takes as long as the other', () => {
    expect(Math.abs((first.road?.drivingMin ?? 0) - (second.road?.drivingMin ?? 0))).toBeLessThan(1)
    expect(made.drivingMin).toBeCloseTo((first.road?.drivingMin ?? 0) + (second.road?.drivingMin ?? 0), 6)
  })

  test('open where the day before closed, and keep all that is wanted', () => {
    expect(first.opening?.chargePct).toBeCloseTo(30, 6)
    expect(second.opening?.chargePct).toBeCloseTo(first.close.closing?.chargePct ?? 0, 0)
    expect(second.close).toMatchObject({ kind: 'race', wanted: { chargePct: 80 } })
    expect(second.close.closing?.chargePct).toBeGreaterThanOrEqual(80)
    for (const { road } of made.days) {
      expect(road?.keepsAll).toBe(true)
      expect(road?.leastSpareWh).toBeGreaterThanOrEqual(0)
    }
  })

  test('are what forecasts at their speeds say, day by day', () => {
    for (const [d, { date, road, opening, close }] of made.days.entries()) {
      const body = { ...EXAMPLE, ...withDay(d, { openingPct: opening?.chargePct }), speeds: road?.speeds, date }
      const { members: _members, ...request } = body as Record<string, unknown>
      const checked = checkDocument(forecastRequest, request)
      if (checked.document === undefined) throw new Error(JSON.stringify(checked.problems))
      const [day] = forecastDocuments(checked.document).days
      expect(Math.abs(day.closing.wh - (close.closing?.wh ?? 0)), date).toBeLessThan(1)
      const arrival = day.stages[day.stages.length - 1].arriveAt ?? ''
      expect(Math.abs(Date.parse(arrival) - Date.parse(road?.arriveAt ?? '')), date).toBeLessThanOrEqual(1000)
    }
  })

  test('are drawn from the opening to the close, inside the pack', () => {
    for (const { series, opening, close } of made.days) {
      if (series === null) throw new Error('a driven day has a series')
      expect(series.wh[0]).toBeCloseTo(opening?.wh ?? 0, 6)
      expect(series.wh[series.wh.length - 1]).toBeCloseTo(close.closing?.wh ?? 0, 6)
      expect(series.atMs).toEqual([...series.atMs].sort((a, b) => a - b))
      for (const wh of series.wh) expect(wh).toBeGreaterThanOrEqual(made.reserve.wh - 1)
      expect(Math.max(...series.wh)).toBeLessThanOrEqual(made.capacityWh)
    }
  })

  test('have ranges around what is planned', () => {
    for (const { ranges, close } of made.days) {
      expect(ranges?.closingWh.p10).toBeLessThan(close.closing?.wh ?? 0)
      expect(ranges?.closingWh.p90).toBeGreaterThan(close.closing?.wh ?? 0)
    }
  })

  test('tell how far they are, never less than before', () => {
    const shares = told.map(({ share }) => share)
    expect(shares).toEqual([...shares].sort((a, b) => a - b))
    expect(told[0].step).toBe('Laying out the race')
    expect(told.map(({ step }) => step)).toEqual(
      expect.arrayContaining(['1 of 2 days planned', '2 of 2 days planned', 'Weighing the close of Sun 18 Oct']),
    )
  })

  test('take longer with the night fixed, by what the plan then says that it costs', () => {
    for (const chargePct of [40, 70]) {
      const given = plan(fixed(chargePct))
      const { close } = given.days[0]
      expect(close).toMatchObject({ kind: 'order', wanted: { chargePct } })
      expect(close.costMin, `${chargePct}`).toBeGreaterThan(0.5)
      expect(Math.abs((close.costMin ?? 0) - (given.bestMin - made.bestMin)), `${chargePct}`).toBeLessThan(0.1)
      expect(Math.abs((close.freePct ?? 0) - (first.close.closing?.chargePct ?? 0))).toBeLessThan(1)
      expect(close.text).toMatch(new RegExp(`^Fixed by this order at ${chargePct} %: it costs .* if it were free.$`))
    }
  })
})

describe('a race plan', { timeout: 60_000 }, () => {
  test('says in words which day cannot be, and that the others wait for it', () => {
    const made = plan({ ...fixed(100), members: 50 })
    expect(made.outcome.kind).toBe('impossible')
    expect(made.outcome.text).toMatch(/^Sat 17 Oct: Twin Wells can be reached, but .* 100 %\.$/)
    expect(made.days.map(({ state }) => state)).toEqual(['impossible', 'waiting'])
    const target = made.days[0].impossible?.nearest.find(({ what }) => what === 'target')
    expect(target?.value).toBeLessThan(100)
    expect(made.days[1].text).toBe('Sun 18 Oct waits: a day before it has no plan.')
    const { days } = plan(fixed(Math.floor(target?.value ?? 0)))
    expect(days[0].state).toBe('driven')
  })

  test('goes on the next day from where a short one ends', () => {
    const made = plan(withDay(0, { driving: { from: '08:00', to: '08:50' } }))
    const [first, second] = made.days
    expect(first.state).toBe('camp')
    expect(first.camp?.leftKm).toBeGreaterThan(40)
    expect(first.text).toMatch(/ before Twin Wells\. The next day goes on from there\.$/)
    expect(second.from).toBe('Old Pump')
    expect((first.road?.km ?? 0) + (second.road?.km ?? 0)).toBeCloseTo(204.803, 2)
  })

  test('knows a day on which nothing is driven', () => {
    const made = plan(withDay(1, { stages: [], targetPct: 40 }))
    expect(made.days.map(({ state }) => state)).toEqual(['driven', 'parked'])
    const [saturday, sunday] = made.days
    expect(sunday.road).toBeNull()
    expect(sunday.opening?.chargePct).toBeCloseTo(saturday.close.closing?.chargePct ?? 0, 0)
    expect(sunday.text).toMatch(/^Sun 18 Oct: the car is not driven and closes with \d+ %\.$/)
  })

  test('may begin in the middle of a day, and end before the race does', () => {
    const from = { at: `${SATURDAY}T09:30:00+02:00`, stage: 'saltpan-old-pump', km: 20, chargePct: 40, speedKmh: 60 }
    const made = plan({ from, toDate: SATURDAY })
    expect(made.days.length).toBe(1)
    expect(made.days[0].opening?.chargePct).toBeCloseTo(40, 6)
    expect(made.days[0].close.kind).toBe('reserve')
    expect(made.days[0].road?.km).toBeCloseTo(82.401, 2)
  })

  test('takes a charge in place of what the days before leave', () => {
    const made = plan({ fromDate: SUNDAY, openingPct: 45 })
    expect(made.days.map(({ date }) => date)).toEqual([SUNDAY])
    expect(made.days[0].opening?.chargePct).toBeCloseTo(45, 6)
  })

  test('may begin after days that the sky does not reach, with the charge of the first that it does', () => {
    const [place] = twoDaySky.places
    const from = place.at.findIndex((at) => at.startsWith(SUNDAY))
    const columns = Object.entries(place).map(([name, cells]) => [
      name,
      Array.isArray(cells) ? cells.slice(from) : cells,
    ])
    const sky = { ...twoDaySky, places: [Object.fromEntries(columns)] }
    const made = plan({ fromDate: SUNDAY, openingPct: 45, sky })
    expect(made.days.map(({ state }) => state)).toEqual(['driven'])
    expect(made.days[0].opening?.chargePct).toBeCloseTo(45, 6)
    expect(() => plan({ fromDate: SUNDAY, sky })).toThrow(InputError)
  })

  test('says that a charge measured on a later day is not used', () => {
    expect(plan(withDay(1, { openingPct: 50 })).assumptions).toContain(
      'The charge measured on Sun 18 Oct is not used: that day opens with what the night before leaves.',
    )
  })

  test.each([
    ['a last day before the first', { fromDate: SUNDAY, toDate: SATURDAY }, 'toDate'],
    [
      'a night before the first day',
      { fromDate: SUNDAY, nights: [{ date: SATURDAY, kind: 'free' }] },
      'nights[0].date',
    ],
    ['a night of no day', { nights: [{ date: '2026-12-01', kind: 'free' }] }, 'nights[0].date'],
    ['a first day of no race', { fromDate: '2026-12-01' }, 'fromDate'],
    [
      'two charges for one opening',
      { openingPct: 50, from: { at: `${SATURDAY}T09:30:00+02:00`, stage: 'saltpan-old-pump', km: 20, chargePct: 40 } },
      'openingPct',
    ],
  ])('refuses %s by its field', (_, more, field) => {
    let refused: unknown
    try {
      plan(more)
    } catch (error) {
      refused = error
    }
    expect(refused).toBeInstanceOf(InputError)
    expect((refused as InputError).field).toBe(field)
  })
})
