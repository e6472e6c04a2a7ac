import type { CoastCar, CoastRun } from './coast-down-trace.ts'
import { InputError } from './input-error.ts'

/** Why runs do not tell rolling from drag: a short stable name, the run counted from 0 where it is one, and words. */
export interface CoastReason {
  code:
    | 'too-few-rows'
    | 'one-direction'
    | 'gap'
    | 'speed-rises'
    | 'braked'
    | 'narrow-span'
    | 'correlated'
    | 'wide-interval'
    | 'not-settled'
    | 'drifting'
  run: number | null
  detail: string
}

/** Fewest rows of a run. */
export const LEAST_ROWS = 8
/** A gap between rows is one that is longer than this and than so many usual steps. */
const GAP_S = 5
const GAP_STEPS = 5
/** Blocks in which speed and deceleration are looked at: at least so many rows and so long. */
const BLOCK_ROWS = 5
const BLOCK_S = 2
/** A rise, or a jump of the deceleration, beyond these and beyond so many standard deviations of a block counts. */
const RISE_MPS = 0.25
const JUMP_MPS2 = 0.1
const JUMP_SHARE = 0.5
const SURE = 5

const kmh = (mps: number): string => (mps * 3.6).toFixed(1)
const seconds = (s: number): string => s.toFixed(1)

/**
 * A run that can be reckoned with.
 *
 * @throws InputError naming run and column that are wrong
 */
export function checkRun(run: CoastRun, r: number): void {
  const field = `runs[${r}]`
  const { length } = run.timeS
  const columns = ['speedMps', 'gradeRad', 'headwindMps', 'crosswindMps'] as const
  for (const name of columns) {
    const column = run[name]
    if (column === null) continue
    if (column.length !== length)
      throw new InputError('wrong-length', `${field}.${name}`, `${column.length} given, ${length} expected`)
    const i = column.findIndex((value) => !Number.isFinite(value))
    if (i >= 0) throw new InputError('not-a-number', `${field}.${name}[${i}]`, `${column[i]} given, a number expected`)
  }
  for (let i = 0; i < length; i++) {
    if (Number.isFinite(run.timeS[i]) && (i === 0 || run.timeS[i] > run.timeS[i - 1])) continue
    throw new InputError('out-of-order', `${field}.timeS[${i}]`, `${run.timeS[i]} given, rising times expected`)
  }
}

/**
 * What is wrong with the runs before anything is fitted to them.
 *
 * @param isLevelKnown whether the slope of the road is known
 * @param isWindKnown  whether the wind is known
 */
export function runReasons(
  car: CoastCar,
  runs: readonly CoastRun[],
  { isLevelKnown, isWindKnown }: { isLevelKnown: boolean; isWindKnown: boolean },
): CoastReason[] {
  const reasons: CoastReason[] = []
  const say = (code: CoastReason['code'], run: number | null, detail: string): void => {
    reasons.push({ code, run, detail })
  }
  const there = runs.filter((run) => run.direction === 1).length
  const missing = [...(isLevelKnown ? [] : ['grade']), ...(isWindKnown ? [] : ['wind'])]
  if ((there === 0 || there === runs.length) && missing.length > 0) {
    const counted = `${runs.length} of ${runs.length} runs go one way`
    say(
      'one-direction',
      null,
      `${counted}; expected runs both ways over the same road, or the ${missing.join(' and the ')} along it: ` +
        'a slope of 0.1 % alone looks like 0.001 of rolling coefficient',
    )
  }
  for (const [r, run] of runs.entries()) {
    const { length } = run.timeS
    if (length < LEAST_ROWS) {
      say('too-few-rows', r, `${length} rows; expected at least ${LEAST_ROWS}`)
      continue
    }
    const gap = gapIn(run)
    if (gap !== null) say('gap', r, gap)
    const odd = oddSpeeds(car, run)
    if (odd !== null) say(odd.code, r, odd.detail)
  }
  return reasons
}

function gapIn({ timeS }: CoastRun): string | null {
  const steps = timeS.slice(1).map((time, i) => time - timeS[i])
  const usual = steps.toSorted()[Math.floor(steps.length / 2)]
  const most = Math.max(GAP_S, GAP_STEPS * usual)
  const i = steps.findIndex((step) => step > most)
  if (i < 0) return null
  const where = `a gap of ${seconds(steps[i])} s after ${seconds(timeS[i] - timeS[0])} s`
  return `${where}; rows come every ${usual.toPrecision(2)} s, so none over ${seconds(most)} s expected`
}

/** Part of a run whose rows are looked at together. */
interface Block {
  atS: number
  speedMps: number
  gradeRad: number
}

type Odd = Pick<CoastReason, 'code' | 'detail'>

/** The first place where a run is driven or braked, by the means of its blocks. */
function oddSpeeds(car: CoastCar, run: CoastRun): Odd | null {
  const blocks = blocksOf(run)
  const sdMps = rowNoiseMps(run) * Math.sqrt(2 / BLOCK_ROWS)
  let [lowest, least] = [Infinity, Infinity]
  for (const [k, block] of blocks.entries()) {
    const at = `${seconds(block.atS - run.timeS[0])} s`
    const rise = block.speedMps - lowest
    if (rise > RISE_MPS + SURE * sdMps) return risen(rise, at)
    lowest = Math.min(lowest, block.speedMps)
    if (k === 0) continue
    const { fallMps2, spanS } = fallBetween(car, blocks[k - 1], block)
    const most = least + Math.max(JUMP_MPS2, JUMP_SHARE * least) + (2 * SURE * sdMps) / spanS
    if (fallMps2 > most) return braked(least, fallMps2, at)
    least = Math.min(least, fallMps2)
  }
  return null
}

/** Deceleration from one block to the next, less what the slope does. */
function fallBetween({ gravity, rotatingFactor }: CoastCar, before: Block, block: Block) {
  const spanS = block.atS - before.atS
  const slopeMps2 = (gravity * Math.sin((block.gradeRad + before.gradeRad) / 2)) / rotatingFactor
  return { fallMps2: (before.speedMps - block.speedMps) / spanS - slopeMps2, spanS }
}

const risen = (riseMps: number, at: string): Odd => ({
  code: 'speed-rises',
  detail: `the speed rises by ${kmh(riseMps)} km/h up to ${at}; expected to fall all the way, neither driven nor downhill`,
})

const braked = (leastMps2: number, fallMps2: number, at: string): Odd => ({
  code: 'braked',
  detail: `the deceleration jumps from ${leastMps2.toFixed(2)} to ${fallMps2.toFixed(2)} m/s² at ${at}; expected to ease off as the car slows, without brakes`,
})

function blocksOf(run: CoastRun): Block[] {
  const blocks: Block[] = []
  let from = 0
  for (let i = 1; i <= run.timeS.length; i++) {
    if (i - from < BLOCK_ROWS || run.timeS[i - 1] - run.timeS[from] < BLOCK_S) continue
    const mean = (column: Float64Array): number => column.subarray(from, i).reduce((a, b) => a + b, 0) / (i - from)
    const gradeRad = run.gradeRad === null ? 0 : mean(run.gradeRad)
    blocks.push({ atS: mean(run.timeS), speedMps: mean(run.speedMps), gradeRad })
    from = i
  }
  return blocks
}

/** Share of the second differences that counts, and the variance of a normal cut to it; worked from its table. */
const KEPT = 0.9
const KEPT_VARIANCE = 0.6231

/**
 * Scatter of single rows, by the second differences of the speed: six variances each, those of spikes left out.
 */
export function rowNoiseMps({ speedMps }: Pick<CoastRun, 'speedMps'>): number {
  const squares = speedMps.slice(2).map((v, i) => (v - 2 * speedMps[i + 1] + speedMps[i]) ** 2)
  const kept = squares.toSorted().subarray(0, Math.ceil(KEPT * squares.length))
  const sum = kept.reduce((total, square) => total + square, 0)
  return kept.length === 0 ? 0 : Math.sqrt(sum / (6 * KEPT_VARIANCE * kept.length))
}
