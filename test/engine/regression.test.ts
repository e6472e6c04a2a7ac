import { describe, expect, it } from 'vitest'
import { diagonal, quadratic } from '../../server/engine/matrix.ts'
import { type NormalInverseGamma, predict, update } from '../../server/engine/regression.ts'

/** Loss polynomial a + b·p + c·p² in shares of full power, an invented bench and four readings; all worked apart. */
const TERM_SDS = [0.002, 0.004, 0.004]
const NOISE = 0.002
const SHARES = [0.15, 0.3, 0.6, 0.9]
const LOST = [0.0082, 0.0112, 0.0168, 0.027]

const priorOf = (sds: number[]): NormalInverseGamma => ({
  mean: Float64Array.from([0.004, 0.012, 0.01, 0, 0].slice(0, sds.length)),
  covariance: diagonal(sds.map((sd) => (sd / NOISE) ** 2)),
  shape: 3,
  rate: 8e-6,
})

const rowOf = (p: number, gains = 0): Float64Array =>
  Float64Array.from([1, p, p * p, ...Array.from({ length: gains }, () => p)])

const shares = (count: number): number[] =>
  count === 1 ? [0.6] : Array.from({ length: count }, (_, k) => 0.2 + (0.8 * k) / (count - 1))

/** Standard deviation of the loss at p = 0.6 with the noise known. */
function lossSd(count: number, gainSds: number[]): number {
  const rows = shares(count).map((p) => rowOf(p, gainSds.length))
  const held = update(priorOf([...TERM_SDS, ...gainSds]), rows, new Float64Array(count))
  return NOISE * Math.sqrt(quadratic(held.covariance, [1, 0.6, 0.36, ...gainSds.map(() => 0)]))
}

describe('four readings on a bench curve', () => {
  const held = update(
    priorOf(TERM_SDS),
    SHARES.map((p) => rowOf(p)),
    LOST,
  )

  it('move its terms to .0052957, .0136166, .0110479 with five parts of noise', () => {
    const expected = [0.005_295_7, 0.013_616_6, 0.011_047_9]
    for (const [j, value] of expected.entries()) expect(Math.abs(held.mean[j] - value)).toBeLessThan(5.1e-8)
    expect(held.shape).toBe(5)
    expect(Math.abs(held.rate - 1.016_36e-5)).toBeLessThan(5.1e-11)
  })

  it('expect .014866 of the next at half power, scale .0015804, ten degrees of freedom', () => {
    const next = predict(held, rowOf(0.5))
    expect(Math.abs(next.mean - 0.014_866)).toBeLessThan(5.1e-7)
    expect(Math.abs(next.scale - 0.001_580_4)).toBeLessThan(5.1e-8)
    expect(next.dof).toBe(10)
    expect(next.lineScale).toBeLessThan(next.scale)
    expect(Math.hypot(next.lineScale, Math.sqrt(held.rate / held.shape))).toBeCloseTo(next.scale, 12)
  })

  it('taken one by one say the same as all at once', () => {
    let one = priorOf(TERM_SDS)
    for (const [k, p] of SHARES.entries()) one = update(one, [rowOf(p)], [LOST[k]])
    for (let j = 0; j < 3; j++) expect(one.mean[j]).toBeCloseTo(held.mean[j], 12)
    for (let k = 0; k < 9; k++) expect(one.covariance.data[k]).toBeCloseTo(held.covariance.data[k], 10)
    expect(one.rate).toBeCloseTo(held.rate, 15)
  })

  it('with a gain of .0122 unknown move less: .004948, .012311, .009997, and the gain .00289', () => {
    const shared = update(
      priorOf([...TERM_SDS, 0.0122]),
      SHARES.map((p) => rowOf(p, 1)),
      LOST,
    )
    for (const [j, value] of [0.004_948, 0.012_311, 0.009_997].entries()) {
      expect(Math.abs(shared.mean[j] - value)).toBeLessThan(5.1e-7)
    }
    expect(Math.abs(shared.mean[3] - 0.002_89)).toBeLessThan(5.1e-6)
  })
})

describe('a gain shared by all readings does not average out', () => {
  it.each([
    [1, 0.003_13, 0.001_73],
    [4, 0.003_02, 0.000_96],
    [40, 0.002_88, 0.000_34],
  ])('after %d readings the loss is known to %f, not to %f', (count, withGain, naive) => {
    expect(Math.abs(lossSd(count, [0.0122]) - withGain)).toBeLessThan(5.1e-6)
    expect(Math.abs(lossSd(count, []) - naive)).toBeLessThan(5.1e-6)
  })

  it('both clamps on one conductor first: .0030 becomes .0016', () => {
    expect(Math.abs(lossSd(4, [0.0122]) - 0.003)).toBeLessThan(5.1e-5)
    expect(Math.abs(lossSd(4, [0.0025]) - 0.0016)).toBeLessThan(5.1e-5)
  })
})

describe('the regression', () => {
  it('weighs one field reading as by hand: .025 ± .004 with .033 ± .0129 is .025702 ± .003821', () => {
    const prior = {
      mean: Float64Array.of(0.025),
      covariance: diagonal([(0.004 / 0.0129) ** 2]),
      shape: 3,
      rate: 1e-4,
    }
    const held = update(prior, [Float64Array.of(1)], [0.033])
    expect(Math.abs(held.mean[0] - 0.025_702)).toBeLessThan(1e-6)
    expect(Math.abs(0.0129 * Math.sqrt(held.covariance.data[0]) - 0.003_821)).toBeLessThan(1e-6)
  })

  it('keeps everything without readings', () => {
    const prior = priorOf(TERM_SDS)
    expect(update(prior, [], [])).toEqual(prior)
  })

  it('refuses by name what does not fit', () => {
    const prior = priorOf(TERM_SDS)
    const refused = (field: string) => expect.objectContaining({ name: 'InputError', field })
    expect(() => update(prior, [Float64Array.of(1, 2)], [0])).toThrowError(refused('rows[0]'))
    expect(() => update(prior, [rowOf(0.5)], [])).toThrowError(refused('y'))
    expect(() => update(prior, [rowOf(Number.NaN)], [0])).toThrowError(refused('rows[0]'))
    expect(() => update(prior, [rowOf(0.5)], [Number.NaN])).toThrowError(refused('y[0]'))
    expect(() => update({ ...prior, shape: 0 }, [], [])).toThrowError(refused('prior.shape'))
    expect(() => update({ ...prior, rate: Number.NaN }, [], [])).toThrowError(refused('prior.rate'))
    expect(() => update({ ...prior, covariance: diagonal([1, -1, 1]) }, [], [])).toThrowError(
      refused('prior.covariance'),
    )
    expect(() => update({ ...prior, covariance: diagonal([1]) }, [], [])).toThrowError(refused('prior.covariance'))
    expect(() => predict(prior, [1])).toThrowError(refused('row'))
  })
})
