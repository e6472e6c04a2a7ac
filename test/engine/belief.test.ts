import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { coverageFactor, learn } from '../../server/engine/belief.ts'
import { checkReading, type TrackerReading } from '../../server/engine/evidence.ts'
import { quadratic } from '../../server/engine/matrix.ts'
import { shownEfficiency } from '../../server/engine/reading-check.ts'
import { TERMS, termsOf } from '../../server/engine/loss-terms.ts'
import { priorFromTerms } from '../../server/engine/tracker-prior.ts'
import {
  believe,
  EXACT,
  FULL,
  METERS,
  PLAIN,
  pointsOver,
  priorTracker,
  shown,
  SWAPPED,
  TYPICAL,
} from './read-trackers.ts'

const WORN = { standingW: 0.8, switchingFraction: 0.005, conductionOhm: 0.07, rectifierV: 0.5 }

describe('before any reading', () => {
  it('a tracker is exactly its bench, as uncertain as that', () => {
    const { trackers, meters, noiseShare, dof } = believe([])
    expect(trackers[0].losses).toEqual(TYPICAL)
    for (const term of TERMS) expect(trackers[0].sd[term] / (0.25 * TYPICAL[term])).toBeCloseTo(1, 3)
    expect(Object.values(trackers[0].isIdentified)).toEqual([false, false, false, false])
    for (const { gain, sd, gainSd } of meters) {
      expect(gain).toBe(0)
      expect(sd).toBeCloseTo(gainSd, 12)
    }
    expect(noiseShare).toBeCloseTo(0.002, 12)
    expect(dof).toBe(6)
  })

  it('a term that the bench shows as nothing stays nothing and may grow: its mean square is the floor’s', () => {
    const prior = priorFromTerms('bow', { ...TYPICAL, rectifierV: 0 }, 0.25, FULL)
    const { losses, sd } = believe([], [prior]).trackers[0]
    expect(losses).toEqual(prior.losses)
    // 0.1 % of 450 W at 450/110 A.
    expect(sd.rectifierV).toBeCloseTo((0.001 * 450) / (450 / 110), 9)
  })

  it('95 % is 1.998 standard deviations with six degrees of freedom, 1.960 with very many', () => {
    // 2.447 (printed table) · √(4/6).
    expect(Math.abs(coverageFactor({ dof: 6 }) - 2.447 * Math.sqrt(4 / 6))).toBeLessThan(5e-4)
    expect(coverageFactor({ dof: 1e6 })).toBeCloseTo(1.96, 3)
  })
})

describe('readings with meters that do not err', () => {
  const readings = pointsOver([60, 150, 250, 350]).map((point, n) => shown(point, WORN, { id: `r${n}` }))

  it('bring the worn tracker’s terms out, and say that they do', () => {
    const { losses, sd, isIdentified } = believe(readings, [priorTracker('bow', TYPICAL, 0.6)]).trackers[0]
    for (const term of TERMS) expect(Math.abs(losses[term] - WORN[term])).toBeLessThan(1.96 * sd[term])
    expect(Object.values(isIdentified)).toEqual([true, true, true, true])
  })

  it('find the scatter that settles: repeated, the noise stays what it is', () => {
    // Readings without scatter: three parts of prior noise over n/2 + 2, and what the terms moved.
    const { noiseShare, dof } = believe(readings, [priorTracker('bow', TYPICAL, 0.6)])
    expect(dof).toBe(2 * (3 + readings.length / 2))
    expect(noiseShare ** 2 * (2 + readings.length / 2)).toBeGreaterThan(8e-6)
    expect(noiseShare).toBeLessThan(0.0011)
  })

  it('leave another tracker and its meters as they were', () => {
    const other = priorTracker('stern', WORN)
    const { trackers, meters } = believe(readings, [priorTracker('bow'), other])
    expect(trackers[1].losses).toEqual(WORN)
    for (const term of TERMS) expect(trackers[1].sd[term] / (0.25 * WORN[term])).toBeCloseTo(1, 3)
    expect(trackers[1].isIdentified.standingW).toBe(false)
    for (const { gain, sd, gainSd } of meters) {
      expect(Math.abs(gain)).toBeLessThan(1e-15)
      expect(sd / gainSd).toBeCloseTo(1, 12)
    }
  })
})

describe('readings of one pair of voltages', () => {
  const at = (powers: number[]) => powers.map((inputW) => ({ inputV: 55, outputV: 110, inputW }))
  const many = (powers: number[]) => at([...powers, ...powers, ...powers]).map((p) => shown(p, WORN))
  const share = (belief: ReturnType<typeof believe>, row: number[]) =>
    Math.sqrt(quadratic(belief.trackers[0].covariance, row))

  it('and one power tell the sum of the losses and none of the terms', () => {
    const belief = believe(many([200, 200, 200, 200]))
    expect(Object.values(belief.trackers[0].isIdentified)).toEqual([false, false, false, false])
    const { inputA, outputA } = shown(at([200])[0], WORN)
    const sum = [1, inputA * 110, inputA ** 2, outputA]
    const before = share(believe([]), sum)
    expect(share(belief, sum)).toBeLessThan(0.3 * before)
  })

  it('and several powers do not tell switching from rectifier, though their sum', () => {
    const unsure = [priorTracker('bow', TYPICAL, 0.6)]
    const belief = believe(many([40, 120, 220, 320, 400]), unsure)
    const { isIdentified } = belief.trackers[0]
    expect(isIdentified.switchingFraction).toBe(false)
    expect(isIdentified.rectifierV).toBe(false)
    expect(isIdentified.conductionOhm).toBe(true)
    const { inputA, outputA } = shown(at([220])[0], WORN)
    const sum = [0, inputA * 110, 0, outputA]
    expect(share(belief, sum)).toBeLessThan(0.5 * share(believe([], unsure), sum))
  })

  it('keep mean and uncertainty of every direction that they do not see', () => {
    // Prior diag(s²) and one row x: what is at right angles to it in prior units, u·(s∘x) = 0, keeps both.
    const reading = shown(at([200])[0], WORN)
    const { inputA, outputV, outputA } = reading
    const row = [1, inputA * outputV, inputA ** 2, outputA]
    const sds = termsOf(TYPICAL).map((value) => 0.1 * value)
    const prior = priorTracker('bow', TYPICAL, 0.1)
    const belief = believe(
      Array.from({ length: 12 }, () => reading),
      [prior],
    )
    const [a, b, c, d] = row.map((value, j) => value * sds[j])
    for (const unseen of [
      [b, -a, 0, 0],
      [0, c, -b, 0],
      [0, 0, d, -c],
    ]) {
      const direction = unseen.map((value, j) => value / sds[j])
      const moved = termsOf(belief.trackers[0].losses).reduce(
        (sum, v, j) => sum + direction[j] * (v - termsOf(TYPICAL)[j]),
        0,
      )
      const size = Math.hypot(...unseen)
      expect(Math.abs(moved / size)).toBeLessThan(1e-9)
      expect(share(belief, direction) / size).toBeCloseTo(1, 6)
    }
  })
})

describe('gains of the meters', () => {
  const gains = [0.002, 0.011, -0.003, -0.008]
  const points = pointsOver([80, 200, 320])

  it('swapped clamps cancel in the geometric mean to first order', () => {
    for (const size of [1, 0.1]) {
      const own = gains.map((gain, k) => (k % 2 === 1 ? gain * size : 0))
      for (const point of points) {
        const [first, second] = [PLAIN, SWAPPED].map((meters) =>
          shownEfficiency(shown(point, TYPICAL, { meters, gains: own })),
        )
        const truth = shownEfficiency(shown(point, TYPICAL))
        expect(Math.abs(Math.sqrt(first * second) / truth - 1)).toBeLessThan(1e-15)
        expect(Math.abs(first / truth - 1)).toBeGreaterThan(0.01 * size)
      }
    }
  })

  it('are found by swapping: the clamps’ difference is known far better', () => {
    const plain = believe(points.map((point) => shown(point, TYPICAL, { meters: PLAIN, gains })))
    const swapped = believe(points.map((point, n) => shown(point, TYPICAL, { meters: n % 2 ? SWAPPED : PLAIN, gains })))
    const difference = ({ covariance, values }: ReturnType<typeof believe>) => {
      const row = [0, 0, 0, 0, 0, 1, 0, -1]
      return { sd: Math.sqrt(quadratic(covariance, row)), mean: values[5] - values[7] }
    }
    expect(difference(plain).sd).toBeGreaterThan(0.003)
    expect(difference(swapped).sd).toBeLessThan(0.0015)
    expect(Math.abs(difference(swapped).mean - 0.019)).toBeLessThan(1.96 * difference(swapped).sd)
    // What both share stays as it was: no tracker tells it. Half of the variance is the most that swapping takes.
    for (const k of [1, 3]) {
      expect(swapped.meters[k].sd).toBeLessThan(plain.meters[k].sd)
      expect(swapped.meters[k].sd / METERS[k].gainSd).toBeCloseTo(Math.SQRT1_2, 1)
    }
  })

  it('are one unknown for two trackers that share meters: what the one teaches helps the other', () => {
    const trackers = [priorTracker('bow', TYPICAL, 0.05), priorTracker('stern', TYPICAL, 0.5)]
    const read = (tracker: number) => points.map((point) => shown(point, TYPICAL, { tracker, meters: PLAIN, gains }))
    const alone = learn({ trackers, meters: METERS, readings: read(1) })
    const together = learn({ trackers, meters: METERS, readings: [...read(0), ...read(1)] })
    const sum = [1, 400, 13, 1.8]
    const sdOf = (belief: typeof alone): number => Math.sqrt(quadratic(belief.trackers[1].covariance, sum))
    expect(sdOf(together)).toBeLessThan(0.7 * sdOf(alone))
  })

  it('of a meter at both sides cancel', () => {
    const both = { inputV: 0, inputA: 1, outputV: 0, outputA: 1 }
    const belief = believe(points.map((point) => shown(point, TYPICAL, { meters: both, gains })))
    for (const term of TERMS) expect(belief.trackers[0].losses[term] / TYPICAL[term]).toBeCloseTo(1, 1)
    expect(belief.meters[1].sd / belief.meters[1].gainSd).toBeGreaterThan(0.99)
  })
})

describe('losses', () => {
  it('are never negative, whatever the readings, and every number is one', () => {
    const number = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    const reading = fc.record({
      id: fc.constant('r'),
      tracker: fc.constantFrom(0, 1),
      inputV: number(20, 90),
      inputA: number(0.1, 9),
      outputV: number(70, 150),
      outputA: number(0.1, 9),
      meters: fc.constantFrom(PLAIN, SWAPPED, EXACT),
    })
    const trackers = [priorTracker('bow'), priorTracker('stern', { ...TYPICAL, rectifierV: 0 }, 2)]
    fc.assert(
      fc.property(fc.array(reading, { maxLength: 12 }), (readings: TrackerReading[]) => {
        const belief = learn({ trackers, meters: METERS, readings })
        for (const { losses, sd } of belief.trackers) {
          for (const term of TERMS) {
            expect(losses[term]).toBeGreaterThanOrEqual(0)
            expect(sd[term]).toBeGreaterThan(0)
          }
        }
        expect(belief.covariance.data.every(Number.isFinite)).toBe(true)
        expect(belief.noiseShare).toBeGreaterThan(0)
        expect(belief.noiseShare).toBeLessThan(10)
      }),
      { numRuns: 200 },
    )
  })

  it('that readings push below nothing are nothing', () => {
    // A tracker without loss, read by exact meters, with a bench that is far from sure.
    const none = { standingW: 0, switchingFraction: 0, conductionOhm: 0, rectifierV: 0 }
    const readings = pointsOver([60, 200, 350]).map((p) => shown(p, none, { scatterW: 0.2 }))
    const { losses } = believe(readings, [priorTracker('bow', TYPICAL, 2)]).trackers[0]
    expect(termsOf(losses).filter((value) => value === 0).length).toBeGreaterThan(1)
    for (const term of TERMS) expect(losses[term]).toBeLessThan(0.1 * TYPICAL[term])
  })
})

describe('what cannot be learned from is refused by name', () => {
  const good = shown({ inputV: 55, outputV: 110, inputW: 200 }, TYPICAL)
  const refused = (field: string) => expect.objectContaining({ name: 'InputError', field })
  it.each<[string, Partial<TrackerReading>]>([
    ['readings[1].inputV', { inputV: 0 }],
    ['readings[1].inputA', { inputA: Number.NaN }],
    ['readings[1].outputA', { outputA: Number.POSITIVE_INFINITY }],
    ['readings[1].tracker', { tracker: 1 }],
    ['readings[1].meters.outputV', { meters: { ...EXACT, outputV: 4 } }],
    ['readings[1].meters.inputA', { meters: { ...EXACT, inputA: 0.5 } }],
  ])('%s', (field, wrong) => expect(() => believe([good, { ...good, ...wrong }])).toThrowError(refused(field)))

  it('priors', () => {
    const prior = priorTracker('bow')
    expect(() => believe([], [{ ...prior, referenceW: 0 }])).toThrowError(refused('trackers[0].referenceW'))
    const losses = { ...TYPICAL, conductionOhm: -1 }
    expect(() => believe([], [{ ...prior, losses }])).toThrowError(refused('trackers[0].losses.conductionOhm'))
    expect(() => believe([], [prior], [{ name: 'm', gainSd: 0 }])).toThrowError(refused('meters[0].gainSd'))
    expect(() => checkReading({ ...good, outputV: -1 }, 1, 0)).toThrowError(refused('reading.outputV'))
  })
})
