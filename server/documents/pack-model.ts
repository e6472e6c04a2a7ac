import { preparePack } from '../engine/battery.ts'
import type { Pack } from '../engine/battery.ts'
import type { CarDocument } from './car.ts'

/** The pack from its cells. */
export function packModel(pack: CarDocument['pack']): Pack {
  const { seriesCells, parallelCells, cellOcv } = pack
  return preparePack({
    capacityC: pack.cellAh * 3600 * parallelCells,
    ocv: {
      charge: Float64Array.from(cellOcv, (row) => row.chargePct / 100),
      V: Float64Array.from(cellOcv, (row) => row.restingV * seriesCells),
    },
    resistanceOhm: (pack.cellOhm * seriesCells) / parallelCells + pack.leadsOhm,
    chargeMaxV: pack.cellMaxV * seriesCells,
    dischargeMinV: pack.cellMinV * seriesCells,
    chargeMaxA: pack.cellChargeMaxA * parallelCells,
    dischargeMaxA: pack.cellDischargeMaxA * parallelCells,
    coulombicEfficiency: pack.coulombicPct / 100,
  })
}
