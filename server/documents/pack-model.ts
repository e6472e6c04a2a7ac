import { preparePack } from '../engine/battery.ts'
import type { Pack, PackInput } from '../engine/battery.ts'
import type { CarDocument } from './car.ts'

type PackDocument = CarDocument['pack']

/** The pack from its cells. */
export function packModel(pack: PackDocument): Pack {
  const { seriesCells, parallelCells, cellOcv } = pack
  return preparePack({
    capacityC: pack.cellAh * 3600 * parallelCells,
    ocv: {
      charge: Float64Array.from(cellOcv, (row) => row.chargePct / 100),
      V: Float64Array.from(cellOcv, (row) => row.restingV * seriesCells),
    },
    resistanceOhm: (pack.cellOhm * seriesCells) / parallelCells + pack.leadsOhm,
    leadsOhm: pack.leadsOhm,
    chargeMaxV: pack.cellMaxV * seriesCells,
    dischargeMinV: pack.cellMinV * seriesCells,
    chargeMaxA: pack.cellChargeMaxA * parallelCells,
    dischargeMaxA: pack.cellDischargeMaxA * parallelCells,
    chargeWindow: windowOf(pack.chargeTemps),
    dischargeWindow: windowOf(pack.dischargeTemps),
    coulombicEfficiency: pack.coulombicPct / 100,
    ...departures(pack),
  })
}

function windowOf({ minC, fullFromC = minC, maxC, fullToC = maxC }: PackDocument['chargeTemps']) {
  return { minC, fullFromC, fullToC, maxC }
}

/** What is given beyond cells that are all alike, of one resistance, and as warm as the air. */
function departures({ ohmFactors, weakestCell, heat, seriesCells }: PackDocument): Partial<PackInput> {
  return {
    ...(ohmFactors === undefined
      ? {}
      : {
          ohmFactor: {
            charge: Float64Array.from(ohmFactors.rows, (row) => row.chargePct / 100),
            tempC: Float64Array.from(ohmFactors.tempsC),
            factor: Float64Array.from(ohmFactors.rows.flatMap((row) => row.factors)),
          },
        }),
    ...(weakestCell === undefined
      ? {}
      : {
          weakest: {
            inSeries: seriesCells,
            capacityDeficit: weakestCell.capacityDeficitPct / 100,
            chargeOffset: weakestCell.chargeOffsetPct / 100,
            extraResistance: weakestCell.extraResistancePct / 100,
          },
        }),
    ...(heat === undefined
      ? {}
      : {
          heat: {
            capacityJPerC: heat.capacityKjPerC * 1000,
            movingWPerC: heat.lossMovingWPerC,
            parkedWPerC: heat.lossParkedWPerC,
          },
        }),
  }
}
