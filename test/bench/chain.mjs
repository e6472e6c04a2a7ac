import { readFileSync } from 'node:fs'
import { arrayHarvest, prepareArray } from '../../dist/server/engine/array.js'
import { prepareSky, weatherAlong } from '../../dist/server/engine/sky.js'
import { sunPath } from '../../dist/server/engine/sun.js'
import { chainArray, chainSky, chainSteps, totalW, trapezoidWh } from './chain-day.mjs'

const CHAIN = JSON.parse(readFileSync(new URL('../reference/chain.json', import.meta.url), 'utf8'))
const STEP_S = 1
const WARM_UP = 20
const TIMED = 41
/** As in test/engine/chain.test.ts: what is timed must be right by the same measure. */
const TOLERANCE = 6e-5

/** Sun, sky, panels, cells and strings over the steps; what a forecast asks of the engine. */
function run(day) {
  const path = sunPath(day.along.atMs[0], day.along.atMs[day.along.count - 1])
  const weather = weatherAlong(day.sky, path, day.along)
  return trapezoidWh(totalW(arrayHarvest(day.array, { weather, ...day.pose })), STEP_S)
}

/**
 * Times the reference day at 1 s steps on one thread, its sky and array prepared and the code warm.
 *
 * @param {'none' | 'physical'} incidence  law of the panels' cover
 * @returns {{ ms: number, fastestMs: number, totalWh: number, steps: number }} ms is the middle of 41 runs
 * @throws Error when the day's energy is not that of test/reference/chain.json
 */
export function chainBench(incidence = 'none') {
  const array = prepareArray(chainArray(CHAIN, incidence))
  const day = { ...chainSteps(CHAIN, STEP_S), sky: prepareSky(chainSky(CHAIN)), array }
  const wantWh = CHAIN.expected[incidence === 'none' ? 'wh_total_1s' : 'wh_total_iam_1s']
  const times = []
  let totalWh = 0
  for (let i = 0; i < WARM_UP + TIMED; i++) {
    const from = performance.now()
    totalWh = run(day)
    if (i >= WARM_UP) times.push(performance.now() - from)
    if (!(Math.abs(totalWh / wantWh - 1) < TOLERANCE)) throw new Error(`${totalWh} Wh, expected ${wantWh} Wh`)
  }
  times.sort((a, b) => a - b)
  return { ms: times[TIMED >> 1], fastestMs: times[0], totalWh, steps: day.along.count }
}
