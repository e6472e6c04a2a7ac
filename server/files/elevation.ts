import { smoothingSpline } from './smoothing-spline.ts'

/** Points closer than this share one height before smoothing, so that a car at rest is one point. [m] */
const SAME_PLACE_M = 2
/** Grade error that the noise may leave after smoothing; sets the smoothing length. [rms, rise per run] */
const GRADE_ERROR = 0.004
/**
 * White noise of σ per point, h apart, leaves a slope of variance SLOPE_OF_NOISE σ² h / L³ behind the spline:
 * 1/2π ∫ u² / (1 + u⁴)² du = 1 / (8√2).
 */
const SLOPE_OF_NOISE = 1 / (8 * Math.SQRT2)
/** Shortest and longest smoothing length; waves of 2π times as long keep half their height. [m] */
const SHORTEST_M = 40
const LONGEST_M = 150
/** Noise is judged from three neighbours within this distance; farther apart they show hills. [m] */
const NOISE_SPAN_M = 100

export interface Heights {
  elevationM: Float64Array
  method: string
  noiseM: number
  lengthM: number
  climbBeforeM: number
  climbAfterM: number
}

/**
 * Heights along a road without the recorder's noise, and the climb before and after.
 *
 * A cubic smoothing spline over distance. Its length follows from the noise found in the record, so that the noise
 * left is a grade of 0.4 % rms; it stays within 40 to 150 m, so waves under 250 m go and waves over 2 km stay.
 * Noise that wanders slowly (a drifting barometer) cannot be told from hills and stays.
 *
 * @param alongM     distance of each point, ascending. [m]
 * @param recordedM  height of each point, none missing. [m]
 */
export function smoothHeights(alongM: Float64Array, recordedM: Float64Array): Heights {
  const knots = placesApart(alongM, recordedM)
  const noise = noiseOf(knots)
  const wanted = Math.cbrt((SLOPE_OF_NOISE * noise.m ** 2 * noise.spacingM) / GRADE_ERROR ** 2)
  const lengthM = Math.min(Math.max(wanted, SHORTEST_M), LONGEST_M)
  const smooth = knots.x.length < 3 ? knots.y : smoothingSpline(knots.x, knots.y, lengthM)
  const elevationM = interpolated(knots.x, smooth, alongM)
  const halfM = Math.round(2 * Math.PI * lengthM)
  return {
    elevationM,
    method: `smoothing spline, waves of ${halfM} m keep half; noise ${noise.m.toFixed(1)} m rms`,
    noiseM: noise.m,
    lengthM,
    climbBeforeM: climbM(recordedM),
    climbAfterM: climbM(elevationM),
  }
}

/** Sum of all rises. [m] */
export function climbM(elevationM: Float64Array): number {
  let sum = 0
  for (let i = 1; i < elevationM.length; i++) sum += Math.max(elevationM[i] - elevationM[i - 1], 0)
  return sum
}

/** Fills missing heights (NaN) along the distance, flat before the first and after the last; says how many. */
export function fillHeights(alongM: Float64Array, elevationM: Float64Array): number {
  const known = [...elevationM.keys()].filter((i) => !Number.isNaN(elevationM[i]))
  let next = 0
  for (let i = 0; i < elevationM.length; i++) {
    while (next < known.length && known[next] < i) next++
    if (known[next] === i) continue
    const before = known[next - 1]
    const after = known[next]
    if (before === undefined || after === undefined) elevationM[i] = elevationM[before ?? after]
    else {
      const share = (alongM[i] - alongM[before]) / (alongM[after] - alongM[before])
      elevationM[i] = elevationM[before] + share * (elevationM[after] - elevationM[before])
    }
  }
  return elevationM.length - known.length
}

interface Knots {
  x: Float64Array
  y: Float64Array
}

function placesApart(alongM: Float64Array, elevationM: Float64Array): Knots {
  const x: number[] = []
  const y: number[] = []
  for (let from = 0; from < alongM.length; ) {
    let to = from
    let sumX = 0
    let sumY = 0
    while (to < alongM.length && (to === from || alongM[to] - alongM[from] < SAME_PLACE_M)) {
      sumX += alongM[to] - alongM[from]
      sumY += elevationM[to]
      to++
    }
    x.push(alongM[from] + sumX / (to - from))
    y.push(sumY / (to - from))
    from = to
  }
  return { x: Float64Array.from(x), y: Float64Array.from(y) }
}

/** Noise per point from how far each lies off the line through its neighbours; 0 where all stand too far apart. */
function noiseOf({ x, y }: Knots): { m: number; spacingM: number } {
  let count = 0
  let off = 0
  let span = 0
  for (let i = 1; i < x.length - 1; i++) {
    const width = x[i + 1] - x[i - 1]
    if (width > NOISE_SPAN_M) continue
    const share = (x[i] - x[i - 1]) / width
    const line = y[i - 1] + share * (y[i + 1] - y[i - 1])
    off += Math.abs(y[i] - line) / Math.sqrt(1 + share ** 2 + (1 - share) ** 2)
    span += width
    count++
  }
  if (count < 10) return { m: 0, spacingM: 0 }
  return { m: (off / count) * Math.sqrt(Math.PI / 2), spacingM: span / count / 2 }
}

/** Straight lines between knots, and the first and last of them beyond. */
function interpolated(x: Float64Array, y: Float64Array, at: Float64Array): Float64Array {
  if (x.length < 2) return new Float64Array(at.length).fill(y[0])
  let k = 0
  return at.map((s) => {
    while (k < x.length - 2 && x[k + 1] <= s) k++
    return y[k] + ((s - x[k]) / (x[k + 1] - x[k])) * (y[k + 1] - y[k])
  })
}
