import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { planDocuments } from '../../server/documents/plan-day.ts'
import { planRequest } from '../../server/documents/plan-request.ts'
import type { PlanDocument } from '../../server/documents/plan.ts'
import { InputError } from '../../server/engine/input-error.ts'
import { demoRequest } from '../support/demo-race.ts'

const DATE = '2026-10-17'
function plan(more: object): PlanDocument {
  const { document, problems } = checkDocument(planRequest, demoRequest({ date: DATE, members: 50, ...more }))
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return planDocuments(document)
}

function forecast(more: object) {
  const { document, problems } = checkDocument(forecastRequest, demoRequest({ date: DATE, ...more }))
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return forecastDocuments(document).days[0]
}

describe('a day whose road cannot be finished in its hours', { timeout: 60_000 }, () => {
  const made = plan({ byTime: '14:00' })
  const { camp, best, outcome, target } = made

  test('is planned to where the car comes furthest, and says so', () => {
    expect(outcome.kind).toBe('furthest')
    const km = camp?.km ?? 0
    expect(outcome.text).toBe(`The day ends at km ${km.toFixed(0)}, ${(568 - km).toFixed(0)} km before Blue Gate.`)
    expect(camp?.goesOn).toBe(true)
    // Less than the time of a piece is left over, at the lowest speed of the plan.
    const spareS = (Date.parse(`${DATE}T14:00:00+02:00`) - Date.parse(best?.arriveAt ?? '')) / 1000
    expect(spareS).toBeGreaterThanOrEqual(0)
    expect(spareS).toBeLessThan(90)
  })

  test('comes as far as the day is said to reach', () => {
    expect(made.impossible?.why).toBe('hours')
    expect(made.impossible?.reachedKm).toBe(camp?.km)
  })

  test('keeps reserve and the charge wanted at the close', () => {
    expect(best?.closingWh).toBeGreaterThanOrEqual(target.wh)
    expect(best?.leastSpareWh).toBeGreaterThanOrEqual(0)
  })

  test('is what a forecast at its speeds to that camp says', () => {
    const again = forecast({ speeds: best?.speeds, until: camp?.until })
    expect(again.drivenKm).toBeCloseTo(camp?.km ?? 0, 2)
    expect(Math.abs(again.closing.wh - (best?.closingWh ?? 0))).toBeLessThan(1)
    const arrival = again.gates.find(({ kind }) => kind === 'finish')?.at ?? ''
    expect(Math.abs(Date.parse(arrival) - Date.parse(best?.arriveAt ?? ''))).toBeLessThanOrEqual(1000)
  })

  test('is beaten by no constant speed', () => {
    let tried = 0
    for (let speedKmh = 60; speedKmh <= 110; speedKmh += 6) {
      const race = demoRequest().race as { days: { driving: object }[] }
      const days = race.days.map((day, d) => (d === 1 ? { ...day, driving: { from: '08:15', to: '14:00' } } : day))
      const day = forecast({ speeds: { kind: 'constant', speedKmh }, race: { ...race, days } })
      if (day.closing.wh < target.wh || day.marginWh < 0) continue
      tried++
      expect(day.drivenKm, `${speedKmh} km/h`).toBeLessThan((camp?.km ?? 0) + 1.2)
    }
    expect(tried).toBeGreaterThan(2)
  })

  test('comes less far the sooner the driving ends', () => {
    const sooner = plan({ byTime: '12:00', objective: 'furthest' })
    expect(sooner.camp?.km).toBeLessThan((camp?.km ?? 0) - 80)
  })
})

test('a day whose road can be finished is planned as ever where the longest way is asked', () => {
  const made = plan({ objective: 'furthest' })
  expect(made.outcome.kind).toBe('planned')
  expect(made.camp).toBeNull()
})

test('an end outside the driving hours is refused by its field', () => {
  expect(() => plan({ byTime: '19:00' })).toThrow(InputError)
  expect(() => plan({ byTime: '08:15' })).toThrow('expected after 08:15 and not after 17:30')
})
