import { describe, expect, it } from 'vitest'
import { bandAxis } from '../../web/charts/axis.ts'
import {
  batteryPath,
  driveSpeeds,
  energyY,
  fanPaths,
  fanPoints,
  speedLabels,
  speedPaths,
  speedSpan,
  speedY,
  TRACKS,
} from '../../web/charts/plan-tracks.ts'
import { sampleMs } from './sample-day.ts'
import { samplePlan } from './sample-plan.ts'

const plan = samplePlan()
const { budget } = plan.forPeople
const axis = bandAxis(budget, 'distance', 358)
const TOP = 40

describe('the likely range along the plan', () => {
  const points = fanPoints(plan)
  const at = (clock: string) => points.find(({ atMs }) => atMs === sampleMs(clock))

  it('is what the gates say, at the gates', () => {
    expect(at('09:45')).toMatchObject({ lowWh: 3570 - 100, highWh: 3570 + 50 })
    expect(at('11:00')?.lowWh).toBeCloseTo(2941.6, 9)
    expect(at('14:00')).toMatchObject({ lowWh: 1436, highWh: 2186 })
  })

  it('keeps its distance from the plan through a stop, and ends at the close', () => {
    // At 11:30, a sixth of the way from the gate of 11:00 to that of 14:00: 200 + (400 − 200)/6 Wh under the plan.
    expect(at('11:30')?.lowWh).toBeCloseTo(66.7 * 51 - 200 - 200 / 6, 6)
    expect(at('11:30')?.highWh).toBeCloseTo(66.7 * 51 + 150 + 200 / 6, 6)
    const last = points[points.length - 1]
    // By the series 41 % of 5 100 Wh at the close, by its balance 2 069.3 Wh: the distances count from the balance.
    expect(last.lowWh).toBeCloseTo(2091 + (1691 - 2069.3), 6)
    expect(last.highWh).toBeCloseTo(2091 + (2591 - 2069.3), 6)
  })

  it('begins at the first gate: nothing is drawn that nobody worked out', () => {
    expect(points[0].atMs).toBe(sampleMs('09:45'))
    expect(fanPoints(samplePlan({ ranges: null }))).toEqual([])
  })

  it('is drawn with both edges inside the track', () => {
    const { fill, edges } = fanPaths(points, axis, energyY(5100, TOP))
    expect(edges.match(/M/g)).toHaveLength(2)
    expect(fill).toMatch(/Z$/)
    const ys = [...edges.matchAll(/,([\d.]+)/g)].map(([, y]) => Number(y))
    expect(Math.min(...ys)).toBeGreaterThan(TOP)
    expect(Math.max(...ys)).toBeLessThan(TOP + TRACKS.battery)
  })
})

describe('the battery of a plan', () => {
  it('is drawn from an empty to a full pack', () => {
    const y = energyY(5100, TOP)
    expect([y(0), y(5100), y(2550), y(-100)]).toEqual([TOP + 176, TOP, TOP + 88, TOP + 176])
    // It opens with 56 % of 5 100 Wh, 2 856.2: 176 × 0.44 px under the top.
    expect(batteryPath(budget, axis, TOP)).toMatch(/^M0,117\.4L/)
  })
})

describe('the speeds of a plan', () => {
  const drives = driveSpeeds(plan)

  it('are held as the sections say, and no faster than the limit', () => {
    expect(drives.map(({ at }) => at.map(({ heldKmh, limitKmh }) => [heldKmh, limitKmh]))).toEqual([
      [
        [80, 110],
        [70, 70],
      ],
      [[80, 110]],
    ])
  })

  it('span from under the slowest to over the limit, and not to a limit far above', () => {
    expect(speedSpan(drives)).toEqual({ lowKmh: 50, highKmh: 120 })
    const open = drives.map((drive) => ({ ...drive, at: drive.at.map((step) => ({ ...step, limitKmh: 200 })) }))
    expect(speedSpan(open)).toEqual({ lowKmh: 50, highKmh: 120 })
  })

  it('stand on the foot of their track, and what is over the limit hangs from its roof', () => {
    const span = speedSpan(drives)
    const { held, over } = speedPaths(drives[0], axis, speedY(span, TOP), TOP)
    expect(held.startsWith(`M${Math.round(axis.x(sampleMs('08:30')) * 10) / 10},${TOP + TRACKS.speedBase}L`)).toBe(true)
    expect(held.endsWith(`V${TOP + TRACKS.speedBase}`)).toBe(true)
    expect(over.endsWith(`V${TOP + TRACKS.speedTop}Z`)).toBe(true)
  })

  it('are written once for a stretch of equal ones, in its middle', () => {
    const labels = speedLabels(plan, axis, speedY(speedSpan(drives), TOP))
    expect(labels.map(({ text }) => text)).toEqual(['80', '80'])
    const middle = (axis.x(sampleMs('08:30')) + axis.x(sampleMs('11:00'))) / 2
    expect(labels[0].x).toBeCloseTo(middle, 1)
  })
})
