import type { DayBudget, LedgerDocument } from '../../server/documents/budget.ts'

const DAY = '2026-10-17T'
const at = (clock: string): string => `${DAY}${clock}:00+02:00`
const ms = (clock: string): number => Date.parse(at(clock))
const line = (id: string, label: string, wh: number) => ({ id, label, wh })

export const LEDGER: LedgerDocument = {
  openingWh: 2856.2,
  income: [
    line('morning-charge', 'Morning charge', 1453.9),
    line('on-the-road', 'On the road', 4994.6),
    line('stop:out', 'Twin Wells stop', 404.7),
    line('evening-charge', 'Evening charge', 644.8),
  ],
  cameInWh: 7498,
  spendings: [
    line('rolling', 'Rolling', 1684.9),
    line('drag', 'Air drag', 5325.1),
    line('climbing', 'Climbing, net', 184.9),
    line('brakes', 'Brakes', 0.4),
    line('auxiliaries', 'Auxiliaries', 364.9),
    line('trackers', 'Tracker losses', 324.9),
    line('drive', 'Drive losses', 344.9),
    line('pack', 'Battery losses', 54.9),
  ],
  wentOutWh: 8284.9,
  shortWh: 0,
  closingWh: 2069.3,
  denied: [line('window', 'Outside the trackers’ window', 84.2), line('full', 'Spill: refused by the pack', 0)],
}

/** A balance of a pack that holds 5100 Wh. */
export const balanceOf = (wh: number, chargePct: number) => ({ wh, chargePct, energyPct: wh / 51 })

type Stage = DayBudget['stages'][number]

const stage = (name: string, places: [string, string], km: [number, number], clocks: [string, string]): Stage => ({
  id: name === 'Stage 1' ? 'out' : 'on',
  name,
  start: places[0],
  finish: places[1],
  fromKm: km[0],
  toKm: km[1],
  drivenKm: km[1] - km[0],
  isFinished: true,
  departAt: at(clocks[0]),
  arriveAt: at(clocks[1]),
  departsNextAt: name === 'Stage 1' ? at('11:30') : null,
  meanKmh: 78,
  opening: balanceOf(4310, 84),
  arrival: balanceOf(3142.2, 61.6),
  closing: balanceOf(3401, 66.7),
  ledger: { ...LEDGER, openingWh: 4310, closingWh: 3401 },
})

const gate = (
  kind: DayBudget['gates'][number]['kind'],
  name: string,
  clock: string,
  km: number,
  chargePct: number,
) => ({
  kind,
  name,
  at: at(clock),
  km,
  ...balanceOf(chargePct * 51, chargePct),
})

const span = (
  kind: DayBudget['spans'][number]['kind'],
  name: string,
  clocks: [string, string],
  km: [number, number],
) => ({
  kind,
  name,
  from: at(clocks[0]),
  to: at(clocks[1]),
  fromKm: km[0],
  toKm: km[1],
})

/** Six steps, so that every mean and place can be worked by hand. */
const STEPS = [
  { clock: '06:00', km: 0, inW: 600, outW: 10, pct: 84, kmh: 0, heightM: 1000 },
  { clock: '08:30', km: 100, inW: 800, outW: 1200, pct: 70, kmh: 80, heightM: 1050 },
  { clock: '09:45', km: 200, inW: 850, outW: 1500, pct: 61.6, kmh: 80, heightM: 1300 },
  { clock: '11:00', km: 200, inW: 900, outW: 20, pct: 66.7, kmh: 0, heightM: 1300 },
  { clock: '11:30', km: 400, inW: 800, outW: 1300, pct: 36, kmh: 78, heightM: 1200 },
  { clock: '14:00', km: 400, inW: 500, outW: 10, pct: 41, kmh: 0, heightM: 1200 },
]
const ENDS = [...STEPS.slice(1).map((step) => step.clock), '18:00']
const zeros = STEPS.map(() => 0)

/** A day of two stages, written by hand: 06:00 to 18:00 local time at UTC+2, 400 km. */
export const sampleDay = (change: Partial<DayBudget> = {}): DayBudget => ({
  date: '2026-10-17',
  zone: 'Africa/Windhoek',
  utcOffsetMin: 120,
  outcome: { kind: 'done', text: 'Blue Gate is reached 14:00.', at: at('14:00'), km: 400 },
  heldKmh: 78,
  speedsTried: 0,
  drivenKm: 400,
  opening: balanceOf(2856.2, 56),
  closing: balanceOf(2069.3, 41),
  reserve: balanceOf(510, 10),
  capacityWh: 5100,
  lowest: { ...balanceOf(1854.1, 36.4), at: at('14:00'), km: 400, place: 'Blue Gate' },
  marginWh: 1344.1,
  target: null,
  targetMarginWh: null,
  ledger: LEDGER,
  stages: [
    stage('Stage 1', ['Saltpan', 'Twin Wells'], [0, 200], ['08:30', '11:00']),
    stage('Stage 2', ['Twin Wells', 'Blue Gate'], [200, 400], ['11:30', '14:00']),
  ],
  gates: [
    gate('dawn', 'Saltpan', '06:00', 0, 56),
    gate('start', 'Saltpan', '08:30', 0, 84),
    gate('arrive', 'Twin Wells', '11:00', 200, 61.6),
    gate('depart', 'Twin Wells', '11:30', 200, 66.7),
    gate('finish', 'Blue Gate', '14:00', 400, 36),
    gate('dusk', 'Blue Gate', '18:00', 400, 41),
  ],
  spans: [
    span('morning-charge', 'Saltpan', ['06:00', '08:30'], [0, 0]),
    span('drive', 'Stage 1', ['08:30', '11:00'], [0, 200]),
    span('stop', 'Twin Wells', ['11:00', '11:30'], [200, 200]),
    span('drive', 'Stage 2', ['11:30', '14:00'], [200, 400]),
    span('evening-charge', 'Blue Gate', ['14:00', '18:00'], [400, 400]),
  ],
  trackers: [],
  pack: { openingC: 14, closingC: 26, coldestC: 14, warmestC: 33, limits: [] },
  penaltyMin: 0,
  series: {
    fromMs: STEPS.map((step) => ms(step.clock)),
    toMs: ENDS.map(ms),
    km: STEPS.map((step) => step.km),
    heightM: STEPS.map((step) => step.heightM),
    speedKmh: STEPS.map((step) => step.kmh),
    limitKmh: zeros,
    inW: STEPS.map((step) => step.inW),
    outW: STEPS.map((step) => step.outW),
    deniedW: zeros,
    wh: STEPS.map((step) => step.pct * 51),
    chargePct: STEPS.map((step) => step.pct),
    energyPct: STEPS.map((step) => step.pct),
    packV: zeros,
    packC: zeros,
    ghiWm2: zeros,
    airTempC: zeros,
    cellTempC: zeros,
    headwindMps: zeros,
    tiltDeg: zeros,
    azimuthDeg: zeros,
  },
  ...change,
})

/** An instant of the sample day by its clock. */
export const sampleMs = ms
export const sampleAt = at
