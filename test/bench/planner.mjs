// Prints the planner's figures as JSON. In one thread, collector and compiler included: node --single-threaded
import { dayEffects } from '../../dist/server/engine/ensemble/day-effects.js'
import { courseOf, members } from '../../dist/server/engine/ensemble/members.js'
import { robustPlan } from '../../dist/server/engine/ensemble/robust.js'
import { dayFrom } from '../../dist/server/engine/from-here.js'
import { backTrack, earliestEnd } from '../../dist/server/engine/planner/back-track.js'
import { earliestArrival } from '../../dist/server/engine/planner/bound-day.js'
import { frontier } from '../../dist/server/engine/planner/frontier.js'
import { holds } from '../../dist/server/engine/planner/judge.js'
import { planDay, someTables } from '../../dist/server/engine/planner/plan-day.js'
import { planRace } from '../../dist/server/engine/planner/plan-race.js'
import { refine } from '../../dist/server/engine/planner/refine.js'
import { quickBase, quickWhatIf } from '../../dist/server/engine/planner/what-if.js'
import { benchRace, benchWeek, OPENING } from './day.mjs'
import { plainEarliestEnd } from './planner-plain.mjs'

const BIN_S = 60
const SPEED_STEP_MPS = 10 / 3.6
const BOUND_CELL_S = 150
const TARGET = 0.35
const SPREADS = {
  sunDay: 0.03,
  sunWander: 0.15,
  wanderS: 5400,
  wanderM: 150_000,
  headwindMps: 0.8,
  roadLoad: 0.03,
  trackers: 0.005,
  openingJ: 180_000,
}

const WARM_UPS = 2

/** What a call gives, its CPU time at first, and the middle of those once it is warm. */
function timed(rounds, call) {
  const times = []
  let result
  for (let round = 0; round < WARM_UPS + rounds; round++) {
    const from = process.cpuUsage()
    result = call()
    const { user, system } = process.cpuUsage(from)
    times.push((user + system) / 1000)
  }
  const [firstMs] = times
  return { result, firstMs, ms: times.slice(WARM_UPS).sort((a, b) => a - b)[rounds >> 1] }
}

const soundPlan = (plan) => {
  if (plan === null || !holds(plan.best.verdict) || !(plan.boundMs <= plan.best.verdict.arrivalMs))
    throw new Error('a plan that does not hold')
}

/** The car half way through the plan's day. */
function midway({ forecast }) {
  const { steps, balance } = forecast
  const i = steps.toM.findIndex((M, n) => M >= 300_000 && steps.speedMps[n] > 0)
  const standing = { stage: 1, placeM: steps.toM[i], stopLeftS: 0, speedMps: steps.speedMps[i] }
  return { standing, charge: balance.charge[i], atMs: steps.toMs[i] }
}

/** A race of five days and 2,800 km, its nights free. */
function wholeRace() {
  const race = benchWeek()
  const targetCharge = [Number.NaN, Number.NaN, Number.NaN, Number.NaN, 0.2]
  const planned = timed(3, () => planRace({ race, dayIndex: 0, opening: OPENING, targetCharge }))
  for (const { plan } of planned.result.days) soundPlan(plan)
  const prices = planned.result.days.flatMap(({ plan }) => [plan.sPerJ[0], plan.sPerJ[plan.reach.count]])
  return { raceMs: planned.ms, raceApart: Math.max(...prices) / Math.min(...prices) - 1 }
}

const CHANGE = { sun: 1, dragArea: 1, rolling: 1, massKg: 0, headwindMps: 0, openingCharge: 0, stopS: 0 }

/** The longest of some quick answers about a planned day. */
function quickAnswers(task) {
  const base = quickBase(task)
  const changes = [{ sun: 0.93 }, { dragArea: 1.05 }, { headwindMps: 1 }, { massKg: 10 }, { openingCharge: -0.03 }]
  const times = changes.map((change) => {
    const { result, ms } = timed(5, () => quickWhatIf(base, { ...CHANGE, ...change }))
    if (!Number.isFinite(result.laterS)) throw new Error('a change without an answer')
    return ms
  })
  return { whatIfMs: Math.max(...times) }
}

/** The planner's search of a day and the same written plainly; both must find the same end. */
function searched(day) {
  const search = timed(5, () => frontier(day, BIN_S, SPEED_STEP_MPS))
  const endS = earliestEnd(day, search.result)
  const plain = timed(1, () => plainEarliestEnd(day, BIN_S, SPEED_STEP_MPS))
  if (!(Math.abs(plain.result - endS) < 1)) throw new Error(`the plain frontier ends ${plain.result - endS} s later`)
  return { search, endS, plain }
}

/** CPU times of planning the 600 km day and of its parts; refuses plans, bounds and frontiers that are not sound. */
function plannerBench() {
  const race = benchRace()
  const task = { race, dayIndex: 0, opening: OPENING, targetCharge: TARGET }
  const plan = timed(7, () => planDay(task))
  soundPlan(plan.result)
  const later = dayFrom(race, 0, midway(plan.result.best))
  const again = timed(7, () => planDay({ ...task, ...later, startMps: plan.result.best.speedMps }))
  soundPlan(again.result)
  const tables = timed(3, () => someTables(task))
  const day = plan.result.tables
  const { search, endS, plain } = searched(day)
  const rest = searched(again.result.tables)
  const drive = backTrack(day, search.result, endS)
  const better = timed(5, () => refine(day, drive))
  const arrivalS = better.result.track.atS[day.pieces]
  const bound = timed(5, () =>
    earliestArrival(day, better.result.sPerJ, arrivalS, BOUND_CELL_S, better.result.track.atS),
  )
  if (!(bound.result <= arrivalS)) throw new Error('a bound above the plan')
  const { reach, best } = plan.result
  const driven = { ...task, reach, forecast: best.forecast, speedMps: best.speedMps }
  const effects = timed(5, () => dayEffects(driven, { linke: 0.5, airC: 1.5, trackerLoss: 0.15 }))
  const lay = ({ drive: of }) =>
    courseOf(day, of, {
      effects: effects.result,
      clearW: new Float64Array(day.pieces).fill(1050),
      perHeadwind: new Float64Array(day.pieces).fill(60),
      spreads: SPREADS,
    })
  const course = lay(better.result)
  const few = timed(9, () => members(course, SPREADS, 200, 1))
  const many = timed(5, () => members(course, SPREADS, 2000, 1))
  const robust = timed(3, () => robustPlan(day, better.result, lay, { spreads: SPREADS, promise: 0.05, seed: 1 }))
  return {
    pieces: day.pieces,
    planMs: plan.ms,
    firstPlanMs: plan.firstMs,
    boundS: (plan.result.best.verdict.arrivalMs - plan.result.boundMs) / 1000,
    peopleS: (plan.result.forPeople.verdict.arrivalMs - plan.result.best.verdict.arrivalMs) / 1000,
    againMs: again.ms,
    tablesMs: tables.ms,
    frontierMs: search.ms,
    plainMs: plain.ms,
    restFrontierMs: rest.search.ms,
    restPlainMs: rest.plain.ms,
    refineMs: better.ms,
    boundMs: bound.ms,
    effectsMs: effects.ms,
    effects: effects.result.length,
    fewMs: few.ms,
    manyMs: many.ms,
    robustMs: robust.ms,
    touchesPct: 100 * robust.result.touches,
    ...wholeRace(),
    ...quickAnswers(task),
  }
}

console.log(JSON.stringify(plannerBench()))
