import { scaleLinear } from 'd3-scale'

/** Rows this many standard deviations off are drawn as hollow diamonds. */
const FAR_OFF = 5
const PLOT_PX = 64
const LEFT_PX = 36
const TICK_ROOM = 44

export interface ResidualAxes {
  left: number
  right: number
  /** Foot of the plot, and height of the drawing. [px] */
  base: number
  height: number
  x: (timeS: number) => number
  y: (kmh: number) => number
  /** Speeds at which the scatter's limits and the ends of the scale are drawn. [km/h] */
  limitKmh: number
  sTicks: number[]
}

interface Room {
  width: number
  lastS: number
  /** Largest residual of any run, and the scatter of a row. [km/h] */
  mostKmh: number
  sdKmh: number
}

/** Axes shared by all runs of a test, so that they compare. */
export function residualAxes({ width, lastS, mostKmh, sdKmh }: Room): ResidualAxes {
  const right = width - 4
  const top = Math.max(mostKmh, 3 * sdKmh, 1e-6) * 1.08
  const x = scaleLinear()
    .domain([0, Math.max(lastS, 1e-6)])
    .range([LEFT_PX + 4, right])
  const y = scaleLinear().domain([-top, top]).range([PLOT_PX, 4])
  const steps = [1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000, 5000]
  const step = steps.find((s) => x(s) - x(0) >= TICK_ROOM) ?? 10_000
  const sTicks = Array.from({ length: Math.floor(lastS / step) + 1 }, (_, i) => i * step)
  return {
    left: LEFT_PX,
    right,
    base: PLOT_PX + 4,
    height: PLOT_PX + 26,
    x,
    y,
    limitKmh: 2 * sdKmh,
    sTicks: sTicks.filter((s) => x(s) < right - 18),
  }
}

/** Dots of ordinary rows and diamonds of those far off, as paths. */
export function residualPaths(
  { x, y }: Pick<ResidualAxes, 'x' | 'y'>,
  { timeS, residualKmh }: { timeS: number[]; residualKmh: number[] },
  sdKmh: number,
): { dots: string; diamonds: string } {
  let [dots, diamonds] = ['', '']
  for (const [i, left] of residualKmh.entries()) {
    const at = `${x(timeS[i]).toFixed(1)} ${y(left).toFixed(1)}`
    if (Math.abs(left) > FAR_OFF * sdKmh) diamonds += `M${at}m0-5l5 5l-5 5l-5-5z`
    else dots += `M${at}h.01`
  }
  return { dots, diamonds }
}
