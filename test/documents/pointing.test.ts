import { describe, expect, test } from 'vitest'
import { forecastDocuments } from '../../server/documents/forecast.ts'
import { pointingDocument } from '../../server/documents/pointing.ts'
import { pointingDocuments } from '../../server/documents/pointing-day.ts'
import { checkedRequest, type Request } from '../support/some-budget.ts'

const oneDay = (change?: (r: Request) => void) => pointingDocuments(checkedRequest(change)).days[0]

describe('where to point the array', () => {
  test('is told for every standing window of the day in local time, and fits its own schema', () => {
    const pointing = pointingDocuments(checkedRequest())
    expect(pointingDocument.parse(pointing)).toEqual(pointing)
    const [{ windows, noWindow, utcOffsetMin }] = pointing.days
    expect(windows.map(({ kind, name }) => `${kind} ${name}`)).toEqual([
      'morning-charge Saltpan',
      'stop Twin Wells',
      'evening-charge Twin Wells',
    ])
    expect(noWindow).toBeNull()
    expect(utcOffsetMin).toBe(120)
    const [morning] = windows
    expect(morning.from).toBe('2026-10-17T06:00:00+02:00')
    expect(morning.arrayUp).toBe('2026-10-17T06:02:00+02:00')
    expect(morning.arrayDown).toBe('2026-10-17T07:58:00+02:00')
    expect(morning.holds[0].from).toBe(morning.arrayUp)
    expect(morning.holds.at(-1)?.to).toBe(morning.arrayDown)
  })

  // Source: by hand: an October morning on the southern tropic: the sun rises south of east and climbs northwards.
  test('faces the morning sun in the east and the evening sun in the west, steeper when it is low', () => {
    const [morning, , evening] = oneDay().windows
    for (const { turnToDeg } of morning.holds) expect(turnToDeg).toBeGreaterThan(60)
    for (const { turnToDeg } of morning.holds) expect(turnToDeg).toBeLessThan(110)
    for (const { turnToDeg } of evening.holds) expect(turnToDeg).toBeGreaterThan(250)
    const tilts = morning.holds.map(({ tiltDeg }) => tiltDeg)
    expect(tilts[11]).toBeLessThan(tilts[3] - 3)
    for (const { sunElevationDeg, tiltDeg } of morning.holds.slice(6))
      expect(Math.abs(90 - sunElevationDeg - tiltDeg)).toBeLessThan(6)
  })

  test('harvest at its best adds up to the budget’s line for the stop’s lifted minutes', () => {
    const asked = checkedRequest()
    const [, stop] = pointingDocuments(asked).days[0].windows
    const line = forecastDocuments(asked).days[0].ledger.income.find(({ id }) => id.startsWith('stop'))
    const sum = stop.holds.reduce((so, { best }) => so + best.harvestWh, 0)
    expect(sum).toBeCloseTo(stop.total.best.harvestWh, 6)
    expect(stop.total.best.harvestWh).toBeLessThan(line?.wh ?? 0)
    // Four of thirty minutes are flat, at noon nearly as good.
    expect(stop.total.best.harvestWh).toBeGreaterThan(0.8 * (line?.wh ?? 0))
  })

  test('costs are the best less the rest, and grow with the angle', () => {
    let counted = 0
    for (const { holds, total } of oneDay().windows)
      for (const { best, flat, off } of [...holds, total]) {
        expect(off.map(({ offDeg }) => offDeg)).toEqual([5, 10, 20])
        for (const each of [flat, ...off]) {
          expect(each.costW).toBeCloseTo(best.stringsW - each.stringsW, 9)
          expect(each.costHarvestWh).toBeCloseTo(best.harvestWh - each.harvestWh, 9)
          expect(each.costPackWh).toBeCloseTo(best.packWh - each.packWh, 9)
        }
        if (best.stringsW < 5) continue
        expect(off[0].costW).toBeGreaterThan(0)
        expect(off[1].costW).toBeGreaterThan(1.9 * off[0].costW)
        expect(off[2].costW).toBeGreaterThan(1.9 * off[1].costW)
        counted++
      }
    expect(counted).toBeGreaterThan(20)
  })

  test('under full cloud it is flat, and being flat costs nothing', () => {
    const day = oneDay((r) => {
      for (const place of r.sky.places) place.cloudPct = place.at.map(() => 100)
    })
    for (const { holds, total } of day.windows) {
      expect(total.flat.costPackWh).toBeLessThan(0.01 * total.best.packWh)
      for (const { tiltDeg, sunElevationDeg } of holds) if (sunElevationDeg > 20) expect(tiltDeg).toBeLessThan(15)
    }
  })

  test('says why there is nothing to point', () => {
    expect(oneDay((r) => void delete r.car.stand)).toMatchObject({ windows: [], noWindow: 'no-stand' })
    const still = oneDay((r) => {
      for (const panel of r.car.panels) panel.lifts = false
    })
    expect(still).toMatchObject({ windows: [], noWindow: 'nothing-lifts' })
    const never = oneDay((r) => {
      r.race.days[0].charging = []
      for (const stage of r.race.days[0].stages ?? []) delete stage.stop
    })
    expect(never).toMatchObject({ windows: [], noWindow: 'never-lifted' })
  })

  test('warns of rules, wind and live connectors', () => {
    const { cautions } = oneDay()
    expect(cautions.join(' ')).toMatch(/event’s rules.*wind.*lethal direct voltage/)
  })
})
