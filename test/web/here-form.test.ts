import { describe, expect, test } from 'vitest'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { hereBy, hereOf, wrongFields } from '../../web/phone/here-form.ts'
import { demoRequest } from '../support/demo-race.ts'

const DATE = '2026-10-17'
const day = forecastDocuments(
  forecastRequest.parse(demoRequest({ date: DATE, speeds: { kind: 'constant', speedKmh: 80 } })),
).days[0]
const stages = day.stages.map((stage) => ({ ...stage, route: '' }))
const typed = { stage: 'one', km: '60,5', time: '12:00', chargePct: '52', speedKmh: '80', stopLeftMin: '' }

describe('where the car is by the budget', () => {
  test('on the road: place on its stage, charge and speed between the steps', () => {
    const [, leg] = day.stages
    const atMs = (Date.parse(leg.departAt) + Date.parse(leg.arriveAt)) / 2
    const here = hereBy(day, stages, atMs)
    expect(here).toMatchObject({ stage: leg.id, stopLeftMin: '' })
    const i = day.series.toMs.findIndex((ms) => ms > atMs)
    const stageKm = Number(here.km) + leg.fromKm
    expect(stageKm).toBeGreaterThanOrEqual(day.series.km[i - 1] - 0.1)
    expect(stageKm).toBeLessThanOrEqual(day.series.km[i] + 0.1)
    expect(Math.abs(Number(here.chargePct) - day.series.chargePct[i])).toBeLessThan(1)
    expect(Number(here.speedKmh)).toBe(Math.round(day.series.speedKmh[i]))
  })

  test('at a stop: the end of its stage and what is left of the minutes', () => {
    const stop = day.spans.find(({ kind }) => kind === 'stop')
    if (stop === undefined) throw new Error('the demo’s Saturday has stops')
    const here = hereBy(day, stages, Date.parse(stop.from) + 10 * 60_000)
    const [leg] = day.stages
    expect(here).toMatchObject({ stage: leg.id, speedKmh: '0' })
    expect(Math.abs(Number(here.km) - (leg.toKm - leg.fromKm))).toBeLessThan(0.1)
    expect(Number(here.stopLeftMin)).toBe(Math.round((Date.parse(stop.to) - Date.parse(stop.from)) / 60_000 - 10))
  })

  test('on another day: as it sets off', () => {
    const here = hereBy(day, stages, Date.parse('2030-01-01T12:00:00Z'))
    expect(here).toMatchObject({ stage: day.stages[0].id, time: '08:15' })
    expect(Number(here.km)).toBeLessThan(1)
  })

  test('on a stage begun the day before the place is left to be typed', () => {
    expect(hereBy(day, [], Date.parse(day.stages[1].departAt) + 3_600_000).km).toBe('')
  })
})

describe('what is typed', () => {
  test('becomes an instant of the day’s own clock', () => {
    expect(hereOf(typed, { date: DATE, zone: 'Africa/Windhoek' })).toEqual({
      at: '2026-10-17T10:00:00.000Z',
      stage: 'one',
      km: 60.5,
      chargePct: 52,
      speedKmh: 80,
    })
    expect(hereOf({ ...typed, stopLeftMin: '8' }, { date: DATE, zone: 'Australia/Adelaide' })).toMatchObject({
      at: '2026-10-17T01:30:00.000Z',
      stopLeftMin: 8,
    })
  })

  test.each([
    ['km', { km: '-1' }],
    ['km', { km: '' }],
    ['chargePct', { chargePct: '101' }],
    ['speedKmh', { speedKmh: 'fast' }],
    ['stopLeftMin', { stopLeftMin: '601' }],
    ['time', { time: '' }],
    ['stage', { stage: '' }],
  ])('is refused by its field: %s', (field, wrong) => {
    expect(Object.keys(wrongFields({ ...typed, ...wrong }))).toEqual([field])
    expect(hereOf({ ...typed, ...wrong }, { date: DATE, zone: 'UTC' })).toBeNull()
  })
})
