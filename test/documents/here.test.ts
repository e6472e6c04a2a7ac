import { describe, expect, test } from 'vitest'
import type { DayBudget } from '../../server/documents/budget.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { InputError } from '../../server/engine/input-error.ts'
import { demoRequest } from '../support/demo-race.ts'

const DATE = '2026-10-17'
function saturday(more: object = {}): DayBudget {
  const request = demoRequest({ speeds: { kind: 'constant', speedKmh: 72 }, date: DATE, ...more })
  const { document, problems } = checkDocument(forecastRequest, request)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return forecastDocuments(document).days[0]
}

function refusal(more: object): { field: string; detail: string } {
  try {
    saturday(more)
  } catch (error) {
    if (error instanceof InputError) return { field: error.field, detail: error.detail }
    throw error
  }
  throw new Error('was not refused')
}

const whole = saturday()
const arrival = whole.gates.find(({ kind, name }) => kind === 'arrive' && name === 'Twin Wells')
const finish = whole.gates.find(({ kind }) => kind === 'finish')

describe('a forecast from where the car is', () => {
  const from = { at: arrival?.at, stage: 'saltpan-twin-wells', km: 196, chargePct: arrival?.chargePct }

  test('that has just come to a stop has all of it before it', () => {
    const rest = saturday({ from })
    expect(rest.gates[0]).toMatchObject({ kind: 'dawn', name: 'Twin Wells', at: arrival?.at })
    expect(Math.abs(Date.parse(rest.gates.at(-2)?.at ?? '') - Date.parse(finish?.at ?? ''))).toBeLessThanOrEqual(1000)
    // The cells come cool from the road and are taken as warm as parked: by hand, 24 K at 0.3 % a kelvin of 1,000 W
    // over some ten minutes, 12 Wh at most.
    expect(Math.abs(rest.closing.wh - whole.closing.wh)).toBeLessThan(4)
  })

  test('that has ten minutes left of it sets off ten minutes later', () => {
    const rest = saturday({ from: { ...from, stopLeftMin: 10 } })
    const setOff = rest.gates.find(({ kind }) => kind === 'depart')
    expect(Date.parse(setOff?.at ?? '') - Date.parse(arrival?.at ?? '')).toBe(600_000)
  })

  test('that is on the road has only the rest of it before it', () => {
    const rest = saturday({
      from: { at: `${DATE}T13:00:00+02:00`, stage: 'twin-wells-quiver-ridge', km: 100, chargePct: 50 },
    })
    expect(rest.opening.chargePct).toBe(50)
    expect(rest.drivenKm).toBeCloseTo(568 - 296, 1)
    expect(rest.stages.map(({ id }) => id)).toEqual(['twin-wells-quiver-ridge', 'quiver-ridge-blue-gate'])
  })

  test.each([
    ['from.at', { at: `${DATE}T22:00:00+02:00` }, '05:45:00+02:00 to 2026-10-17T19:00:00+02:00'],
    ['from.stage', { stage: 'nowhere' }, 'expected one of saltpan-loop'],
    ['from.km', { km: 197 }, '196.000 km long'],
    ['from.stopLeftMin', { km: 100, stopLeftMin: 5 }, 'only at the end of a stage with a stop (km 196.0'],
  ])('is refused by %s', (field, wrong, said) => {
    const found = refusal({ from: { ...from, ...wrong } })
    expect(found.field).toBe(field)
    expect(found.detail).toContain(said)
  })
})

describe('a day that ends at a camp', () => {
  test('is driven to there and no farther; the evening is spent there', () => {
    const camped = saturday({ until: { stage: 'quiver-ridge-blue-gate', km: 100 } })
    expect(camped.drivenKm).toBeCloseTo(502, 6)
    expect(camped.outcome.text).toMatch(/^Camp at km 100 of Quiver Ridge to Blue Gate is reached \d\d:\d\d\.$/)
    const before = saturday().stages[1]
    expect(Math.abs(camped.stages[1].closing.wh - before.closing.wh)).toBeLessThan(0.01)
  })

  test('is refused off its road', () => {
    expect(refusal({ until: { stage: 'quiver-ridge-blue-gate', km: 400 } }).field).toBe('until.km')
    expect(refusal({ until: { stage: 'twin-wells-saltpan', km: 10 } }).field).toBe('until.stage')
  })
})
