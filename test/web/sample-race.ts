import type { RacePlanDay, RacePlanDocument } from '../../web/race-types.ts'

const HOUR_MS = 3_600_000
const opensMs = (date: string): number => Date.parse(`${date}T06:00:00+02:00`)

/** A driven day of twelve hours that closes with half a pack of 5,000 Wh. */
export function sampleRaceDay(date: string, more: Partial<RacePlanDay> = {}): RacePlanDay {
  const fromMs = opensMs(date)
  return {
    date,
    zone: 'Africa/Windhoek',
    utcOffsetMin: 120,
    state: 'driven',
    text: 'Sat 17 Oct: Blue Gate 16:05 after 7 h 50 min, closing with 50 %.',
    from: 'Saltpan',
    to: 'Blue Gate',
    opening: { wh: 4000, chargePct: 80 },
    road: {
      setOffAt: `${date}T08:15:00+02:00`,
      arriveAt: `${date}T16:05:20+02:00`,
      drivingMin: 470.4,
      bestMin: 470.3,
      bestArriveAt: `${date}T16:05:16+02:00`,
      withinMin: 3,
      keepsAll: true,
      km: 568,
      leastSpareWh: 800,
      speeds: {
        kind: 'sections',
        speedKmh: 70,
        sections: [{ stage: 'out', fromKm: 0, toKm: 568, speedKmh: 78 }],
      },
      sections: [{ stage: 'Out', fromKm: 0, toKm: 568, speedKmh: 78 }],
    },
    camp: null,
    close: {
      kind: 'found',
      wanted: { wh: 2500, chargePct: 50 },
      closing: { wh: 2500, chargePct: 50 },
      costMin: null,
      freePct: null,
      eveningSPerWh: 1.8,
      morningSPerWh: 1.8,
      text: 'Found: 50 %.',
    },
    ranges: {
      members: 2000,
      closingWh: { p10: 2000, p50: 2500, p90: 3000 },
      lateMin: { p10: -10, p50: 0, p90: 12 },
      touchesReservePct: 4,
    },
    impossible: null,
    series: { atMs: [0, 2, 10, 12].map((h) => fromMs + h * HOUR_MS), wh: [4000, 4500, 1500, 2500] },
    drives: [{ fromMs: fromMs + 2 * HOUR_MS, toMs: fromMs + 10 * HOUR_MS }],
    ...more,
  }
}

/** Two such days. */
export function sampleRace(days = [sampleRaceDay('2026-10-17'), sampleRaceDay('2026-10-18')]): RacePlanDocument {
  return {
    engineVersion: '1.2.0',
    race: 'Plateau Run',
    car: 'Weaver 2',
    zone: 'Africa/Windhoek',
    assumptions: [],
    outcome: { kind: 'planned', text: '' },
    drivingMin: 940.8,
    bestMin: 940.6,
    capacityWh: 5000,
    reserve: { wh: 600, chargePct: 12 },
    days,
  }
}

/** Such a close with a charge that race or order give. */
export const givenClose = (more: Partial<RacePlanDay['close']> = {}): { close: RacePlanDay['close'] } => ({
  close: { ...sampleRaceDay('2026-10-17').close, kind: 'race', costMin: 1.2, freePct: 60, ...more },
})
