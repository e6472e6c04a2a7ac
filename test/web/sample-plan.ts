import type { DayBudget } from '../../server/documents/budget.ts'
import type { Planned } from '../../web/plan-types.ts'
import { sampleAt, sampleDay } from './sample-day.ts'

/** The sample day with limits: 110 km/h, 70 on the second step of the road. */
const limited = (): DayBudget => {
  const day = sampleDay()
  return sampleDay({ series: { ...day.series, limitKmh: [0, 110, 70, 0, 110, 0] } })
}

const SPEEDS = { kind: 'constant' as const, speedKmh: 80 }
const CHOICE = { speeds: SPEEDS, drivingMin: 330, closingWh: 2091, closingPct: 41, leastSpareWh: 1326 }

/** A plan of the sample day, written by hand. */
export const samplePlan = (change: Partial<Planned> = {}): Planned => ({
  engineVersion: '1.1.0',
  race: 'Plateau Run',
  car: 'Weaver 2',
  date: '2026-10-17',
  zone: 'Africa/Windhoek',
  assumptions: [],
  outcome: { kind: 'planned', text: 'Blue Gate is reached 13:59 at the earliest.' },
  camp: null,
  target: { wh: 2040, chargePct: 40 },
  best: { ...CHOICE, arriveAt: sampleAt('13:59') },
  forPeople: {
    ...CHOICE,
    arriveAt: sampleAt('14:00'),
    costMin: 1,
    budget: limited(),
    sections: [
      { stage: 'Stage 1', fromKm: 0, toKm: 100, speedKmh: 80 },
      { stage: 'Stage 1', fromKm: 100, toKm: 200, speedKmh: 80 },
      { stage: 'Stage 2', fromKm: 200, toKm: 400, speedKmh: 80 },
    ],
  },
  constant: { speedKmh: 76, arriveAt: sampleAt('14:03'), laterMin: 4 },
  bound: { arriveAt: sampleAt('13:58'), withinMin: 96.2 / 60 },
  prices: [
    { km: 0, sPerWh: 1.65 },
    { km: 10, sPerWh: 1.66 },
    { km: 20, sPerWh: 2.4 },
  ],
  limits: [],
  ranges: {
    members: 2000,
    seed: 1,
    closingWh: { p10: 1691, p50: 2100, p90: 2591 },
    harvestWh: { p10: 1, p50: 2, p90: 3 },
    lateMin: { p10: -12, p50: 0, p90: 25 },
    touchesReservePct: 3.9,
    touchesMostKm: 400,
    missesTargetPct: 45.85,
    gates: [
      // By the series: 3 570 Wh at 09:45 and 3 401.7 Wh at 11:30; 61.6 % of 5 100 Wh on arrival at 11:00.
      { name: 'km 100', km: 100, at: sampleAt('09:45'), plannedWh: 3570, wh: { p10: 3470, p50: 3570, p90: 3620 } },
      {
        name: 'Twin Wells',
        km: 200,
        at: sampleAt('11:00'),
        plannedWh: 3141.6,
        wh: { p10: 2941.6, p50: 3140, p90: 3291.6 },
      },
      { name: 'Blue Gate', km: 400, at: sampleAt('14:00'), plannedWh: 1836, wh: { p10: 1436, p50: 1836, p90: 2186 } },
    ],
    causes: [],
  },
  steady: {
    promisePct: 2,
    touchesPct: 1.8,
    costMin: 8.5,
    arriveAt: sampleAt('14:07'),
    speeds: {
      kind: 'sections',
      speedKmh: 70,
      sections: [
        { stage: 'out', fromKm: 0, toKm: 80, speedKmh: 77.6 },
        { stage: 'out', fromKm: 80, toKm: 200, speedKmh: 78.4 },
        { stage: 'on', fromKm: 0, toKm: 200, speedKmh: 78.1 },
      ],
    },
  },
  impossible: null,
  ...change,
})
