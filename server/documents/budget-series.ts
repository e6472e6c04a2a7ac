import { storedJ } from '../engine/battery.ts'
import type { DayBudget } from './budget.ts'
import { dayKm } from './budget-day.ts'
import type { ForecastDay } from './budget-day.ts'

const DEG = 180 / Math.PI

/** Digits after the point that each column is given with; more than any instrument on the car shows. */
const rounded = (values: Float64Array, count: number, digits: number, scale = 1): number[] => {
  const unit = 10 ** digits
  const out: number[] = []
  for (let i = 0; i < count; i++) out.push(Math.round((Number.isNaN(values[i]) ? 0 : values[i]) * scale * unit) / unit)
  return out
}

/** The steps of a day in the units of the trade, one value per step. */
export function seriesDocument(day: ForecastDay): DayBudget['series'] {
  const { steps, weather, air, aim, balance, cellC } = day.forecast
  const column = (values: Float64Array, digits: number, scale = 1) => rounded(values, steps.count, digits, scale)
  const limitMps = Float64Array.from(steps.piece, (piece, i) =>
    steps.speedMps[i] > 0 ? day.race.course.pieces.limitMps[piece] : 0,
  )
  return {
    fromMs: column(steps.fromMs, 0),
    toMs: column(steps.toMs, 0),
    km: column(
      steps.toM.map((m) => dayKm(day, m)),
      3,
    ),
    heightM: column(steps.altM, 1),
    speedKmh: column(steps.speedMps, 2, 3.6),
    limitKmh: column(limitMps, 1, 3.6),
    inW: column(balance.inW, 1),
    outW: column(balance.outW, 1),
    deniedW: column(balance.deniedW, 1),
    wh: column(balance.storedJ, 2, 1 / 3600),
    chargePct: column(balance.charge, 3, 100),
    energyPct: column(balance.storedJ, 3, 100 / storedJ(day.race.car.pack, 1)),
    packV: column(balance.packV, 2),
    packC: column(balance.packC, 1),
    ghiWm2: column(weather.ghiWm2, 1),
    airTempC: column(weather.airC, 1),
    cellTempC: column(cellC, 1),
    headwindMps: column(air.headwindMps, 2),
    tiltDeg: column(aim.tiltRad, 1, DEG),
    azimuthDeg: column(aim.azimuthRad, 1, DEG),
  }
}
