import { readFileSync } from 'node:fs'
import { arrayModel } from '../../dist/server/documents/array-model.js'
import { carDocument } from '../../dist/server/documents/car.js'
import { trackerModel } from '../../dist/server/documents/tracker-model.js'
import { newOperatingPoint, operatingPoint } from '../../dist/server/engine/operating-point.js'
import { fillStrings, offBest, prepareStrings } from '../../dist/server/engine/string-harvest.js'
import { stringBest, stringPowerAtV } from '../../dist/server/engine/string.js'
import { trackerOutputW } from '../../dist/server/engine/tracker-output.js'

const DEMO = JSON.parse(readFileSync(new URL('../../server/demo/weaver-2.json', import.meta.url), 'utf8'))
const STEPS = 20_000
const ROUNDS = 41
/** As in test/engine/string-solver.test.ts: what is timed must be right by the same measure. */
const TOLERANCE = 3e-5
/** As in test/engine/string.test.ts, for strings in one light. */
const TABLE_TOLERANCE = 4e-4
const PACK_V = 108
/** Below the best voltage of 78 cells in full light, above that in weak light. */
const EDGE_V = 40

/** Light of four panels through a day, each tipped another way, some minutes of it shaded; cells 30 K warmer at full light. */
function day() {
  const effectiveWm2 = [0, 1, 2, 3].map((panel) =>
    Float64Array.from({ length: STEPS }, (_, i) => {
      const high = Math.sin((Math.PI * (i + 1)) / (STEPS + 1))
      const tipped = 1 + 0.12 * panel * Math.cos((Math.PI * i) / STEPS)
      return 950 * high * tipped * (panel === 1 && i % 400 < 20 ? 0.3 : 1)
    }),
  )
  return { effectiveWm2, cellC: effectiveWm2.map((light) => light.map((each) => 25 + 0.03 * each)) }
}

/** Cells of the demo's kind, 78 in series over so many panels. */
function stringOver(panels) {
  const car = carDocument.parse(DEMO)
  const [any] = arrayModel(car, { groundAlbedo: 0.2, skyModel: 'perez' }).model.strings
  const groups = Array.from({ length: panels }, (_, panel) => ({
    panel,
    cellsInSeries: Math.round(78 / panels),
    bypassDiodes: 2,
  }))
  return { ...any, name: `${panels} panels`, groups, faults: [] }
}

/** Fewest nanoseconds an evaluation of many rounds: what the code takes when the machine has time for it. */
function fewestNs(run) {
  let least = Infinity
  for (let k = 0; k < ROUNDS; k++) {
    const from = performance.now()
    run()
    least = Math.min(least, performance.now() - from)
  }
  return (least / STEPS) * 1e6
}

const off = (got, want) => Math.abs(got - want) / Math.max(want, 1e-9)

/** Throws where a sample of the steps is not what the exact solver says. */
function check(string, array, harvest) {
  for (let i = 0; i < STEPS; i += 997) {
    const at = (columns) => columns.map((column) => column[i])
    const [lights, warmths] = [at(harvest.effectiveWm2), at(harvest.cellC)]
    if (Math.min(...lights) < 5) continue
    const best = stringBest(string, lights, warmths)
    const wrong = Math.max(
      off(harvest.bestW[0][i], best.W),
      off(offBest(array, 0, harvest).atV(i, 0.9 * best.V), stringPowerAtV(string, lights, warmths, 0.9 * best.V)),
    )
    const most = string.groups.length > 1 ? TOLERANCE : TABLE_TOLERANCE
    if (!(wrong < most)) throw new Error(`${string.name}, step ${i}: ${wrong} of the exact power off`)
  }
}

/** Watts to the bus from the best points of all steps, through a tracker. */
function toBusW(tracker, held, harvest, hasHills) {
  const point = newOperatingPoint()
  const around = { packV: PACK_V, airC: 25, isMoving: true }
  let step = 0
  const powerAtV = (volts) => held.atV(step, volts)
  const bestBetweenV = hasHills ? (low, high) => held.bestBetweenV(step, low, high) : undefined
  const best = { W: 0, V: 0, bestBetweenV }
  let sumW = 0
  for (step = 0; step < STEPS; step++) {
    best.W = harvest.bestW[0][step]
    best.V = harvest.bestV[0][step]
    operatingPoint(tracker, best, around, powerAtV, point)
    sumW += point.inputW > 0 ? trackerOutputW(tracker, point.inputW, point.inputV, PACK_V) : 0
  }
  if (!(sumW > 0)) throw new Error('the string gave nothing')
}

/** One string: best point, power at a held voltage, and light to bus with a window that it fits and one that it leaves. */
function stringFigures(panels) {
  const string = stringOver(panels)
  const array = { strings: prepareStrings([string]) }
  const harvest = { ...day(), bestW: [new Float64Array(STEPS)], bestV: [new Float64Array(STEPS)] }
  const fill = () => fillStrings(array.strings, harvest, false)
  const bestNs = fewestNs(fill)
  check(string, array, harvest)
  const held = offBest(array, 0, harvest)
  let sumW = 0
  const heldNs = fewestNs(() => {
    for (let i = 0; i < STEPS; i++) sumW += held.atV(i, harvest.bestV[0][i] * (0.85 + (i % 7) / 25))
  })
  if (!(sumW > 0)) throw new Error('the string gave nothing')
  const [tracker] = carDocument.parse(DEMO).trackers.map(trackerModel)
  const narrow = { ...tracker, window: { ...tracker.window, inputMaxV: EDGE_V } }
  const chainNs = (through) =>
    fewestNs(() => {
      fill()
      toBusW(through, held, harvest, panels > 1)
    })
  return { panels, bestNs, heldNs, busNs: chainNs(tracker), edgeNs: chainNs(narrow) }
}

/** Middle time of building a car's array with all its tables. [ms] */
function tablesMs(document) {
  const car = carDocument.parse(document)
  const times = []
  for (let k = 0; k < ROUNDS; k++) {
    const from = performance.now()
    arrayModel(car, { groundAlbedo: 0.2, skyModel: 'perez' })
    times.push(performance.now() - from)
  }
  return times.sort((a, b) => a - b)[ROUNDS >> 1]
}

/** The demo car with twelve strings over two panels each, of three kinds of cell. */
function twelveStrings() {
  const [string] = DEMO.strings
  const { mono } = DEMO.cellTypes
  const cellTypes = { mono, older: { ...mono, lightCurrentA: 5.9 }, newer: { ...mono, lightCurrentA: 6.4 } }
  const trackers = Array.from({ length: 12 }, (_, i) => ({ ...DEMO.trackers[0], name: `Tracker ${i}` }))
  const strings = trackers.map(({ name }, i) => ({
    name: `String ${i}`,
    tracker: name,
    cellType: Object.keys(cellTypes)[i % 3],
    soilingPct: string.soilingPct,
    cells:
      i < 6
        ? [{ panel: DEMO.panels[0].name, inSeries: 30 + i }]
        : [
            { panel: DEMO.panels[0].name, inSeries: 20 + i },
            { panel: DEMO.panels[1].name, inSeries: 22, bypassDiodes: 2 },
          ],
  }))
  return { ...DEMO, cellTypes, strings, trackers }
}

/**
 * Times strings over one to four panels on one thread, and the building of tables.
 *
 * @throws Error where a sample is not what the exact solver says
 */
export function stringsBench() {
  return {
    strings: [1, 2, 3, 4].map(stringFigures),
    demoTablesMs: tablesMs(DEMO),
    twelveTablesMs: tablesMs(twelveStrings()),
  }
}
