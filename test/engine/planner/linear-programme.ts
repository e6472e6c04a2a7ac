import * as highs from 'highs'
import type { DayTables } from '../../../server/engine/planner/day-tables.ts'
import { cubicLookUp } from './second-by-second.ts'

const WH = 3600
/** Its types are those of a CommonJS module, whose default is in the default; what is loaded is not. */
const loadSolver = highs.default as unknown as typeof highs.default.default

/** What a linear programme finds for a day. */
export interface Linear {
  arrivalS: number
  /** What a joule more on leaving each piece's start saves. [s/J] (pieces) */
  sPerJ: Float64Array
}

/**
 * Earliest arrival of a day whose sun, stops and evening do not change with time, as a linear programme: every piece is
 * a mixture of grid speeds, each with its time and what it stores; what a full pack cannot take is lost.
 *
 * Energy stored is concave in the time a piece takes, so the best mixture has two neighbouring speeds and lies under
 * the best single speed by what the chord between them lies under the curve: the arrival is no earlier than the best
 * there is, and later by no more than the grid.
 *
 * @param stepMps  step of the grid of speeds
 */
export async function linearArrival(day: DayTables, stepMps: number): Promise<Linear> {
  const { clock, speeds, pack, pieces } = day
  const columns: { cost: number; low: number; high: number; rows: [number, number][] }[] = []
  const rows: { low: number; high: number }[] = []
  const row = (low: number, high: number): number => rows.push({ low, high }) - 1
  const column = (cost: number, low: number, high: number): number => columns.push({ cost, low, high, rows: [] }) - 1
  const stored = (W: number): number => (W > 0 ? W * pack.coulombic : W) - W * W * pack.lossPerW
  const ceilingWh = pack.ceilingJ / WH
  /** Energy at the next edge is at most that at the last one and what comes in between. */
  const flow = (from: number, comesWh: number, leastWh: number): { row: number; column: number } => {
    const to = { row: row(Number.NEGATIVE_INFINITY, comesWh), column: column(0, leastWh, ceilingWh) }
    columns[to.column].rows.push([to.row, 1])
    columns[from].rows.push([to.row, -1])
    return to
  }
  const balance = new Int32Array(pieces)
  let held = column(0, day.start.energyJ / WH, day.start.energyJ / WH)
  let stopsS = 0
  for (let i = 0; i <= pieces; i++) {
    for (const stop of day.stops.filter(({ beforePiece }) => beforePiece === i)) {
      held = flow(held, stop.gainJ[0] / WH, 0).column
      stopsS += stop.lengthS[0]
    }
    if (i === pieces) break
    const wanted = i + 1 === pieces ? Math.max(day.targetJ - day.duskGainJ[0], day.floorJ[pieces]) : day.floorJ[i + 1]
    const next = flow(held, -day.extraJ[i] / WH, wanted / WH)
    balance[i] = next.row
    const whole = row(1, 1)
    const loads = day.loadW.subarray(i * speeds.count, (i + 1) * speeds.count)
    const fastest = day.fastestMps[i]
    for (let v = fastest; v > Math.min(day.slowestMps, fastest) - 1e-9; v -= stepMps) {
      const timeS = day.lengthM[i] / v + day.extraS[i]
      const J = stored(day.harvestW[i * clock.count] - cubicLookUp(loads, speeds.from, speeds.step, v)) * timeS
      const share = column(timeS, 0, 1)
      columns[share].rows.push([next.row, -J / WH], [whole, 1])
    }
    held = next.column
  }
  const solver = await loadSolver()
  const starts = [0]
  for (const { rows: of } of columns) starts.push(starts[starts.length - 1] + of.length)
  const entries = columns.flatMap(({ rows: of }) => of)
  return solver.withModel(
    {
      numCols: columns.length,
      numRows: rows.length,
      colCost: columns.map(({ cost }) => cost),
      colLower: columns.map(({ low }) => low),
      colUpper: columns.map(({ high }) => high),
      rowLower: rows.map(({ low }) => low),
      rowUpper: rows.map(({ high }) => high),
      matrix: {
        format: 'csc',
        numRows: rows.length,
        numCols: columns.length,
        starts,
        indices: entries.map(([at]) => at),
        values: entries.map(([, value]) => value),
      },
    },
    (model) => {
      model.options.set({ output_flag: false })
      model.run()
      if (model.getModelStatus() !== solver.constants.modelStatus.optimal) throw new Error('no optimum')
      const { rowDual } = model.getSolution()
      return {
        arrivalS: day.start.atS + stopsS + model.getObjectiveValue(),
        sPerJ: Float64Array.from(balance, (at) => -rowDual[at] / WH),
      }
    },
  )
}
