import { describe, expect, it } from 'vitest'
import { fitLosses } from '../../server/engine/loss-fit.ts'
import { quadratic } from '../../server/engine/matrix.ts'
import { lossFactors, TERMS, termsOf } from '../../server/engine/loss-terms.ts'
import { type SpreadPoint, WIDE_SHARE } from '../../server/engine/bench-told.ts'
import { FLOOR_SHARE, priorFromBench, priorFromTerms, priorSds, widened } from '../../server/engine/tracker-prior.ts'
import { FULL, pointsOver, shown, TYPICAL } from './read-trackers.ts'
import { normalFrom, seeded } from './seeded.ts'

/** A bench of exact points, each claimed to be good within this standard deviation of efficiency. */
const benchOf = (efficiencySd: number, losses = TYPICAL): SpreadPoint[] =>
  pointsOver([50, 120, 200, 300, 400]).map((point) => {
    const { outputV, outputA } = shown(point, losses)
    return { ...point, outputW: outputV * outputA, efficiencySd }
  })

const rowAt = (inputV: number, outputV: number, inputW: number): number[] =>
  lossFactors(inputW / inputV, outputV, (0.97 * inputW) / outputV)

describe('a prior from given terms', () => {
  it('is as uncertain as the share says, each term apart', () => {
    const { losses, covariance, referenceW } = priorFromTerms('bow', TYPICAL, 0.25, FULL)
    expect(losses).toEqual(TYPICAL)
    expect(referenceW).toBe(450)
    const variances = [0.15 ** 2, 0.001 ** 2, 0.0125 ** 2, 0.1 ** 2]
    for (let j = 0; j < 4; j++) {
      for (let k = 0; k < 4; k++) expect(covariance.data[j * 4 + k]).toBeCloseTo(j === k ? variances[j] : 0, 15)
    }
  })

  it('lets a term of nothing grow by 0.1 % of full power', () => {
    const none = { standingW: 0, switchingFraction: 0, conductionOhm: 0, rectifierV: 0 }
    const sds = termsOf(priorSds(priorFromTerms('bow', none, 0.25, FULL)))
    // By hand: 450 W at 7.5 A and 60 V, 110 V and 4.0909 A.
    const expected = [0.45, 0.45 / 825, 0.45 / 56.25, 0.45 / 4.090_909]
    for (const [j, sd] of sds.entries()) expect(sd / expected[j]).toBeCloseTo(1, 6)
  })
})

describe('a prior from a bench', () => {
  it('is the bench’s own curve', () => {
    const points = benchOf(0.004)
    expect(priorFromBench('bow', points, 450).losses).toEqual(fitLosses(points).losses)
  })

  it('knows the loss at the bench’s points better than one of them, and less well beyond', () => {
    const { covariance } = priorFromBench('bow', benchOf(0.004), 450)
    const sdW = (row: number[]): number => Math.sqrt(quadratic(covariance, row))
    expect(sdW(rowAt(55, 90, 200))).toBeLessThan(0.5 * 0.004 * 200)
    expect(sdW(rowAt(25, 140, 200))).toBeGreaterThan(2 * sdW(rowAt(55, 125, 200)))
  })

  it('is as uncertain as benches of that spread are: a thousand invented benches', () => {
    // Points whose lost watts are equally uncertain, so that the plain fit is the weighted one; D hardly weighs.
    const normal = normalFrom(seeded(7))
    const exact = benchOf(1).map((p) => ({ ...p, efficiencySd: 0.3 / p.inputW }))
    const { covariance } = priorFromBench('bow', exact, 450)
    const row = rowAt(55, 125, 200)
    const expected = Math.sqrt(quadratic(covariance, row))
    let squares = 0
    for (let k = 0; k < 1000; k++) {
      const points = exact.map((p) => ({ ...p, outputW: Math.min((p.outputW ?? 0) + 0.3 * normal(), p.inputW) }))
      const off = termsOf(fitLosses(points).losses).map((value, j) => value - termsOf(TYPICAL)[j])
      squares += off.reduce((sum, value, j) => sum + value * row[j], 0) ** 2
    }
    expect(Math.abs(Math.sqrt(squares / 1000) / expected - 1)).toBeLessThan(0.15)
  })

  it('holds terms that one pair of voltages cannot tell apart within 1 % of full power, and their sum well', () => {
    const points = benchOf(0.004).filter((p) => p.inputV === 55 && p.outputV === 125)
    const prior = priorFromBench('bow', [...points, ...points], 450)
    const { switchingFraction, rectifierV } = priorSds(prior)
    const inputA = 450 / 55
    expect(switchingFraction * inputA * 125).toBeLessThan(WIDE_SHARE * 450)
    expect(rectifierV * (450 / 125)).toBeLessThan(1.01 * WIDE_SHARE * 450)
    const both = [0, (200 / 55) * 125, 0, 194 / 125]
    expect(Math.sqrt(quadratic(prior.covariance, both))).toBeLessThan(0.25 * WIDE_SHARE * 450)
  })

  it('leaves room to a term that it shows as nothing, however sure the bench', () => {
    const prior = priorFromBench('bow', benchOf(0.000_01, { ...TYPICAL, rectifierV: 0 }), 450)
    expect(prior.losses.rectifierV).toBeLessThan(1e-12)
    // Full power at 107.5 V out.
    expect(priorSds(prior).rectifierV).toBeCloseTo((FLOOR_SHARE * 450) / (450 / 107.5), 9)
    expect(priorSds(prior).standingW).toBeLessThan(0.01)
  })
})

describe('a planner', () => {
  it('may widen a bench: the same curve, twice as unsure', () => {
    const prior = priorFromBench('bow', benchOf(0.004), 450)
    const wide = widened(prior, 2)
    expect(wide.losses).toEqual(prior.losses)
    for (const term of TERMS) expect(priorSds(wide)[term] / priorSds(prior)[term]).toBeCloseTo(2, 12)
  })

  it('is told what is wrong', () => {
    const refused = (field: string) => expect.objectContaining({ name: 'InputError', field })
    const points = benchOf(0.004)
    expect(() => priorFromTerms('bow', TYPICAL, 0, FULL)).toThrowError(refused('spread'))
    expect(() => priorFromTerms('bow', TYPICAL, 0.2, { ...FULL, inputV: 0 })).toThrowError(refused('full.inputV'))
    const below = { ...TYPICAL, rectifierV: -0.1 }
    expect(() => priorFromTerms('bow', below, 0.2, FULL)).toThrowError(refused('losses.rectifierV'))
    expect(() => priorFromBench('bow', points, Number.NaN)).toThrowError(refused('fullW'))
    points[3].efficiencySd = 0
    expect(() => priorFromBench('bow', points, 450)).toThrowError(refused('points[3].efficiencySd'))
    expect(() => widened(priorFromTerms('bow', TYPICAL, 0.2, FULL), 0.5)).toThrowError(refused('factor'))
  })
})
