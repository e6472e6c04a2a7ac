import { describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { trackerDaysOf } from '../../server/documents/tracker-days.ts'
import { toldText } from '../../server/documents/told-words.ts'
import { someCar, someRace, someRoute, someSky } from '../support/scenario.ts'
import type { Request } from '../support/some-budget.ts'

function both(change: (request: Request) => void = () => undefined) {
  const request: Request = {
    car: someCar(),
    race: someRace(),
    routes: { road: someRoute(200) },
    sky: someSky(),
    speeds: { kind: 'constant', speedKmh: 75 },
  }
  change(request)
  const { document, problems } = checkDocument(forecastRequest, request)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  const [day] = trackerDaysOf(document).days
  return { day, budget: forecastDocuments(document).days[0] }
}

describe('the price of a minute', () => {
  // b = ½ρCdA/η with ρ = 88 000/(287.05·298.15) = 1.02825 kg/m³, 0.1 m², 0.96; 2bv³ at 75 km/h = 968.4 W.
  // A minute saved on the road also saves 30 W of driving for 6 W of standing: 944.4 W are 15.74 Wh/min.
  const calm = (request: Request): void => {
    const [place] = request.sky.places
    place.airTempC = place.at.map(() => 25)
    place.pressureHpa = place.at.map(() => 880)
    request.car.pack = { ...request.car.pack, cellOhm: 1e-5, leadsOhm: 0, coulombicPct: 100 }
  }

  test('without sun is 2bv³ of the road load, worked by hand', () => {
    const { day } = both((request) => {
      calm(request)
      request.car.trackers.forEach((tracker) => Object.assign(tracker, { isDead: true }))
      request.race.openingPct = 95
    })
    expect(Math.abs((day.price.whPerMin ?? 0) / 15.74 - 1)).toBeLessThan(0.012)
    expect(day.price.how).toBe('From the day’s forecast at 1 km/h below and above the 75 km/h held.')
  })

  test('with the sun’s time given up at the stop is higher by what the array gives then', () => {
    const price = (charging: boolean): number => {
      const { day } = both((request) => {
        calm(request)
        request.sky.places[0].cloudPct = request.sky.places[0].at.map(() => 100)
        request.race.days[0].charging = charging ? [{ from: '08:00', to: '18:30' }] : []
      })
      return day.price.whPerMin ?? Number.NaN
    }
    // Where the car may charge wherever it stands, an earlier finish gives up no sun; else it gives up all of it.
    expect(price(false)).toBeGreaterThan(price(true) + 1)
  })

  test('is none where the clock ends the day, where limits leave no other speed, or where the car stands', () => {
    const cut = both((request) => void (request.speeds = { kind: 'constant', speedKmh: 18 }))
    expect(cut.day.price).toEqual({ whPerMin: null, how: 'No price: the clock, not the road, ends the day.' })
    const limited = both((request) => {
      request.routes.road.limitKmh = 60
      request.speeds = { kind: 'constant', speedKmh: 100 }
    })
    expect(limited.day.price.how).toBe('No price: limits leave no other speed.')
    for (const own of [...cut.day.trackers, ...limited.day.trackers]) {
      expect(own.parts[0].onePointMin).toBeNull()
      expect(own.ifDead?.min).toBeNull()
      expect(own.ifDead?.wh).toBeGreaterThanOrEqual(0)
    }
  })
})

describe('each tracker of a day', () => {
  const { day, budget } = both((request) => {
    request.car.trackers[0].window.maxW = 300
    request.car.trackers[1].window.inputMaxA = 3
  })

  test('has the day’s own figures first, and parts that add up to it', () => {
    day.trackers.forEach(({ parts }, i) => {
      const [whole, ...rest] = parts
      expect(whole.inputWh).toBeCloseTo(budget.trackers[i].inputWh, 6)
      expect(whole.lossWh).toBeCloseTo(budget.trackers[i].lossWh, 6)
      expect(rest.map(({ kind }) => kind)).toEqual(['morning-charge', 'drive', 'stop', 'evening-charge'])
      for (const field of ['inputWh', 'lossWh', 'bestWh', 'onePointWh'] as const)
        expect(rest.reduce((sum, part) => sum + part[field], 0)).toBeCloseTo(whole[field], 6)
      const minutesAt = (limit: string) => (part: (typeof parts)[number]) =>
        part.edges.find((edge) => edge.limit === limit)?.minutes ?? 0
      for (const { limit } of whole.edges)
        expect(rest.map(minutesAt(limit)).reduce((a, b) => a + b, 0)).toBeCloseTo(minutesAt(limit)(whole), 6)
    })
  })

  test('names each edge, how long and what it cost', () => {
    const [deck, nose] = day.trackers.map(({ parts }) => parts[0].edges)
    expect(deck).toMatchObject([{ limit: 'power', label: 'highest input power', effect: 'power limited' }])
    expect(nose).toMatchObject([{ limit: 'current', label: 'highest input current', effect: 'current limited' }])
    const deniedWh = [...deck, ...nose].reduce((sum, edge) => sum + edge.deniedWh, 0)
    expect(deniedWh).toBeCloseTo(budget.ledger.denied.find(({ id }) => id === 'window')?.wh ?? Number.NaN, 6)
  })

  test('is weighed at its own mean voltages and its highest power', () => {
    const [deck] = day.trackers
    expect(deck.ratedW).toBe(300)
    for (const { europeanPct, californianPct, meanEfficiencyPct, meanInputV, meanPackV } of deck.parts) {
      for (const pct of [europeanPct, californianPct, meanEfficiencyPct]) {
        expect(pct).toBeGreaterThan(90)
        expect(pct).toBeLessThan(99)
      }
      expect(meanInputV ?? 0).toBeLessThan(meanPackV ?? 0)
    }
    // Four losses by hand at half of 300 W: 1 + 0.005·I·Vout + 0.08·I² and 0.4 V, in percent.
    const { meanInputV, meanPackV, europeanPct } = deck.parts[0]
    const efficiency = (W: number, Vin: number, Vout: number): number =>
      (W - 1 - (W / Vin) * (0.005 * Vout + (0.08 * W) / Vin)) / (1 + 0.4 / Vout) / W
    const byHand = [
      [0.05, 0.03],
      [0.1, 0.06],
      [0.2, 0.13],
      [0.3, 0.1],
      [0.5, 0.48],
      [1, 0.2],
    ].reduce((sum, [p, w]) => sum + w * efficiency(300 * p, meanInputV ?? 0, meanPackV ?? 0), 0)
    expect(europeanPct).toBeCloseTo(100 * byHand, 9)
  })

  test('shows its path inside its window, below the pack', () => {
    for (const { path, lowestV, highestV } of day.trackers) {
      expect(path.atMs.length).toBeLessThanOrEqual(200)
      path.inputV.forEach((volts, i) => {
        if (path.inputW[i] === 0) return
        expect(volts).toBeGreaterThanOrEqual(lowestV - 0.01)
        expect(volts).toBeLessThanOrEqual(Math.min(highestV, path.packV[i]) + 0.01)
      })
    }
  })

  test('costs dead what its output brought, less what the pack would have lost of it', () => {
    day.trackers.forEach(({ parts: [{ inputWh, lossWh }], ifDead }) => {
      const broughtWh = inputWh - lossWh
      expect(ifDead?.wh).toBeLessThan(broughtWh)
      expect(ifDead?.wh).toBeGreaterThan(0.95 * broughtWh)
      expect(ifDead?.min).toBeCloseTo((ifDead?.wh ?? 0) / (day.price.whPerMin ?? 0), 9)
    })
  })
})

test('a channel that shares its string costs little dead, and a dead one nothing more', () => {
  const { day } = both((request) => {
    const [first] = request.car.trackers
    request.car.strings[0].alsoTrackers = ['second', 'third']
    request.car.trackers.push({ ...first, name: 'second' }, { ...first, name: 'third', isDead: true })
  })
  const [first, second, third, nose] = day.trackers
  expect(first.ifDead?.wh).toBeCloseTo(second.ifDead?.wh ?? Number.NaN, 6)
  expect(Math.abs(first.ifDead?.wh ?? Infinity)).toBeLessThan(0.05 * (nose.ifDead?.wh ?? 0))
  expect(third).toMatchObject({ isDead: true, ifDead: null })
})

describe('what a bench tells, in words', () => {
  const terms = { standingW: true, switchingFraction: true, conductionOhm: true, rectifierV: true }
  test.each([
    [{ terms, sums: [] }, 'The bench tells all four losses apart.'],
    [
      {
        terms: { ...terms, switchingFraction: false, rectifierV: false },
        sums: [['switchingFraction' as const, 'rectifierV' as const]],
      },
      'The bench tells standing and conduction; switching and rectifier only together. Points at other voltages would tell more.',
    ],
    [
      { terms: { standingW: true, switchingFraction: false, conductionOhm: false, rectifierV: false }, sums: [] },
      'The bench tells standing. It does not tell switching, conduction and rectifier. Points at other voltages would tell more.',
    ],
    [
      { terms: { standingW: false, switchingFraction: false, conductionOhm: false, rectifierV: false }, sums: [] },
      'The bench tells none of the losses. Points at other voltages would tell more.',
    ],
  ])('%j', (told, text) => expect(toldText(told)).toBe(text))
})
