import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { someCar, someRace, someRoute, someSky } from '../support/scenario.ts'

/**
 * One hour worked by hand: a level road at 20 m/s from rest to rest, with 0.6 m/s² up and 1 m/s² down, in bright sun with each of
 * two trackers held to 100 W by its window, one watt of standing loss each.
 */
function hour() {
  const car = someCar()
  for (const tracker of car.trackers) {
    tracker.window.maxW = 100
    tracker.losses = { standingW: 1, switchingPct: 0, conductionOhm: 0, rectifierV: 0 }
  }
  car.pack.coulombicPct = 100
  const race = someRace()
  const [day] = race.days
  day.driving = { from: '11:00', to: '12:00' }
  day.charging = []
  day.release = '11:00'
  day.impound = '12:00'
  for (const stage of day.stages ?? []) delete stage.stop
  const sky = someSky()
  const [place] = sky.places
  place.airTempC = place.at.map(() => 25)
  place.pressureHpa = place.at.map(() => 880)
  const { document, problems } = checkDocument(forecastRequest, {
    car,
    race,
    routes: { road: someRoute(100) },
    sky,
    speeds: { kind: 'constant', speedKmh: 72 },
  })
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return forecastDocuments(document).days[0]
}

describe('an hour of driving, worked by hand', () => {
  const day = hour()
  const line = (id: string) =>
    [...day.ledger.spendings, ...day.ledger.income].find((l) => l.id === id)?.wh ?? Number.NaN
  // ρ = p/(R T) = 88 000/(287.05 · 298.15) = 1.02825 kg/m³; gas constant of dry air, US Standard Atmosphere 1976
  const half = 0.5 * 1.02825 * 0.1
  const startM = 20 ** 2 / 1.2
  const brakeM = 20 ** 2 / 2
  // Starting loses 20/1.2 s and braking 10 s against 20 m/s for the whole hour.
  const wayM = 72_000 - 20 * (20 / 1.2 + 10)
  // While the speed changes its square is linear in distance: half of the drag.
  const dragWh = (half * 20 ** 2 * (wayM - (startM + brakeM) / 2)) / 3600
  const rollingWh = (250 * 9.80665 * 0.0035 * wayM) / 3600
  const kineticWh = (0.5 * 250 * 1.03 * 20 ** 2) / 3600
  // Braking, second by hundredth: what the road leaves over, up to 2000 W at the motor; the rest is the brakes'.
  const braking = Array.from({ length: 2000 }, (_, i) => {
    const v = 20 - (i + 0.5) / 100
    return (250 * 1.03 - 250 * 9.80665 * 0.0035 - half * v * v) * v
  })
  const takenWh = braking.reduce((sum, w) => sum + Math.min(w, 2000) / 100, 0) / 3600
  const brakesWh = braking.reduce((sum, w) => sum + Math.max(w - 2000, 0) / 100, 0) / 3600

  test('71.467 km are driven', () => {
    expect(day.drivenKm).toBeCloseTo(71.466_667, 6)
    expect(day.outcome.kind).toBe('cut-off')
  })

  test('two trackers held at 100 W bring 200 Wh and lose 2 Wh', () => {
    expect(line('on-the-road')).toBeCloseTo(200, 6)
    expect(line('trackers')).toBeCloseTo(2, 6)
  })

  test('rolling is weight × coefficient × way: 170.3 Wh', () => {
    expect(rollingWh).toBeCloseTo(170.345, 3)
    expect(line('rolling')).toBeCloseTo(rollingWh, 6)
    expect(line('climbing')).toBeCloseTo(0, 6)
  })

  test('drag is half density × drag area × speed² × way, half of it while starting and braking: 406.7 Wh', () => {
    expect(dragWh).toBeCloseTo(406.7, 1)
    expect(line('drag')).toBeCloseTo(dragWh, 1)
  })

  // All that was pulled from the wheels' side: the road's work and what braking took back.
  const pulledWh = rollingWh + dragWh + takenWh + brakesWh

  test('the drive loses 4 % of what it takes, and 40 % of the 8.9 of 14.3 Wh of motion that it brakes', () => {
    expect(kineticWh).toBeCloseTo(14.306, 3)
    expect(takenWh).toBeCloseTo(8.9, 1)
    expect(line('drive')).toBeCloseTo(pulledWh / 0.96 - pulledWh + 0.4 * takenWh, 1)
    expect(line('brakes')).toBeCloseTo(brakesWh, 1)
    expect(line('auxiliaries')).toBeCloseTo(30, 6)
  })

  test('the pack loses I²R at about 4 A', () => {
    const ohm = (0.045 * 30) / 14 + 0.02
    const drawnW = (rollingWh + dragWh) / 0.96 + 30 - 198
    const ampere = drawnW / 112.3
    expect(line('pack')).toBeGreaterThan(ampere ** 2 * ohm)
    expect(line('pack')).toBeLessThan(ampere ** 2 * ohm + 0.5)
  })

  test('opening plus income less all spendings is the closing balance', () => {
    const spentWh = pulledWh / 0.96 - 0.6 * takenWh + 30 - 198 + line('pack')
    expect(day.opening.wh - day.closing.wh).toBeCloseTo(spentWh, 1)
  })
})
