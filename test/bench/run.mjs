// Figures for people; what is timed is checked by the measures of the tests, and nothing passes or fails by its time.
import { execFileSync } from 'node:child_process'
import { existsSync, readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { gzipSync } from 'node:zlib'

const START = fileURLToPath(new URL('../../server/start.mjs', import.meta.url))
const PLANNER = fileURLToPath(new URL('planner.mjs', import.meta.url))
const ASSETS = new URL('../../dist/web/', import.meta.url)

execFileSync(process.execPath, [START, '--build-only'], { stdio: ['ignore', 'ignore', 'inherit'] })
const { chainBench } = await import('./chain.mjs')
const { coastBench } = await import('./coast.mjs')
const { dayBench } = await import('./day.mjs')
const { eventLoopBench } = await import('./event-loop.mjs')
const { pointingBench } = await import('./pointing.mjs')
const { startUpBench } = await import('./start-up.mjs')
const { stringsBench } = await import('./strings.mjs')
const { streamsBench } = await import('./streams.mjs')
const { trackersBench } = await import('./trackers.mjs')

/** Scripts and styles that a page names and, if wanted, those that they name in turn. */
function loadedBy(page, isDeep) {
  const found = new Set()
  const look = (text) => {
    for (const [name] of text.matchAll(/[\w-]+-[\w-]{8}\.(?:js|css)/g)) {
      const file = `assets/${name}`
      if (found.has(file) || !existsSync(new URL(file, ASSETS))) continue
      found.add(file)
      if (isDeep) look(readFileSync(new URL(file, ASSETS), 'utf8'))
    }
  }
  look(readFileSync(new URL(page, ASSETS), 'utf8'))
  return [...found]
}

const say = (what, figure, note) => console.log(`${what.padEnd(46)} ${figure.padStart(12)}  ${note}`)
const ms = (value) => `${value.toFixed(2)} ms`

const chain = chainBench()
say(
  'chain day at 1 s steps, one thread',
  ms(chain.ms),
  `${chain.steps} steps, 3 panels, ${chain.totalWh.toFixed(2)} Wh`,
)
const modified = chainBench('physical')
say('the same with incidence losses', ms(modified.ms), `${modified.totalWh.toFixed(2)} Wh`)
const strings = stringsBench()
const perSecond = (ns) => `${(1e3 / ns).toFixed(2)} M/s`
for (const { panels, bestNs, heldNs, busNs, edgeNs } of strings.strings) {
  const over = panels === 1 ? 'one panel' : `${panels} panels`
  say(
    `string over ${over}, light to bus`,
    perSecond(busNs),
    `best point ${perSecond(bestNs)}, held ${perSecond(heldNs)}, to bus at a window's edge ${perSecond(edgeNs)}`,
  )
}
say('tables of the demo car', ms(strings.demoTablesMs), `of a car with 12 strings ${ms(strings.twelveTablesMs)}`)
for (const [runs, stepS] of [
  [4, 1],
  [20, 0.1],
]) {
  const coast = coastBench(runs, stepS)
  say(`coast-down of ${runs} runs, a row each ${stepS} s`, ms(coast.ms), `${coast.rows} rows, wind and slope found`)
}
const trackers = trackersBench()
say(
  "a tracker's output by four terms",
  `${trackers.fitNs.toFixed(0)} ns`,
  `by 40 bench points ${trackers.tableNs.toFixed(0)} ns`,
)
say(
  'tracker report of a 600 km day',
  ms(trackers.reportMs),
  `${trackers.trackers} trackers: ${2 + trackers.trackers} days driven`,
)
const day = dayBench()
say('forecast of a 600 km day, one thread', ms(day.ms), `${day.steps} steps, 3 strings`)
say('fastest speed that meets the target', ms(day.searchMs), `${day.tried} speeds tried`)
say('chain day over 600 km day', (chain.ms / day.ms).toFixed(2), 'ratio in this run')
const pointing = pointingBench()
say('poses of a morning, aimed anew every 10 min', ms(pointing.holdMs), `${pointing.steps} steps of a minute, 3 panels`)
say('the same, following all the time', ms(pointing.followMs), '')
say('pointing table of the 600 km day', ms(pointing.tableMs), '4 windows, flat and 3 angles off')
const plan = JSON.parse(execFileSync(process.execPath, ['--single-threaded', PLANNER], { encoding: 'utf8' }))
say(
  'plan of a 600 km day, one thread',
  ms(plan.planMs),
  `the first ${ms(plan.firstPlanMs)}; ${plan.pieces} pieces; bound ${plan.boundS.toFixed(0)} s before, for people ${plan.peopleS.toFixed(0)} s after`,
)
say('the same again from half way', ms(plan.againMs), '')
say('its tables', ms(plan.tablesMs), `bound ${ms(plan.boundMs)}`)
say(
  'its frontier, 60 s bins',
  ms(plan.frontierMs),
  `written plainly ${ms(plan.plainMs)}; refinement ${ms(plan.refineMs)}`,
)
// The yardstick is the search: tables, refinement and forecasts around it would be the same for both.
say('frontier of the rest of that day', ms(plan.restFrontierMs), `written plainly ${ms(plan.restPlainMs)}`)
say(
  '200 members',
  ms(plan.fewMs),
  `2,000 ${ms(plan.manyMs)}, with ${plan.effects} effects that took ${ms(plan.effectsMs)}`,
)
say('race of 2,800 km in five days', ms(plan.raceMs), `prices of energy ${(100 * plan.raceApart).toFixed(1)} % apart`)
say('quick what-if', ms(plan.whatIfMs), 'the longest of five changes')
say('robust plan', ms(plan.robustMs), `touches the reserve on ${plan.touchesPct.toFixed(1)} % of fresh days`)
const { firstS, secondS } = await startUpBench()
say('first start, demo race loaded', `${firstS.toFixed(1)} s`, 'empty data folder, already built')
say('second start', `${secondS.toFixed(1)} s`, '')
const streams = await streamsBench(500)
say(
  '500 open streams hear of a reading, p99',
  ms(streams.p99Ms),
  `from its sending; first ${ms(streams.firstMs)}, p99 of the rest ${ms(streams.spreadMs)} later`,
)
const loop = await eventLoopBench(4)
say(
  'event loop while 4 race plans are made, p99',
  ms(loop.work.p99Ms),
  `longest ${ms(loop.work.maxMs)}; at rest ${ms(loop.rest.p99Ms)} and ${ms(loop.rest.maxMs)}`,
)
say(
  'ordinary answers meanwhile, p99',
  ms(loop.answerP99Ms),
  `${loop.answered} in ${loop.tookS.toFixed(0)} s; the event loop waited ${(100 * loop.work.waitedShare).toFixed(0)} % of it for a core`,
)
const weight = (files) => files.reduce((sum, name) => sum + gzipSync(readFileSync(new URL(name, ASSETS))).length, 0)
for (const page of ['index.html', 'share.html']) {
  const first = loadedBy(page, false)
  const all = loadedBy(page, true)
  const later = `${(weight(all) / 1000).toFixed(1)} kB with the screens opened later`
  say(
    `JS and CSS that ${page} loads, gzip`,
    `${(weight(first) / 1000).toFixed(1)} kB`,
    `${first.length} files; ${later}`,
  )
}
