import { describe, expect, it } from 'vitest'
import { type CoastTest, fitCoastDown } from '../../server/engine/coast-down.ts'
import type { CoastRun } from '../../server/engine/coast-down-trace.ts'
import { bothWays, CAR, coastRun, measured, slopingRun, testOf } from './coast-runs.ts'

/** Codes and words of a refusal; empty where the runs are fitted. */
function reasonsOf(test: CoastTest): { codes: string[]; text: string; runs: (number | null)[] } {
  const answer = fitCoastDown(test)
  const reasons = answer.kind === 'refused' ? answer.reasons : []
  return {
    codes: reasons.map(({ code }) => code),
    text: reasons.map(({ detail }) => detail).join('\n'),
    runs: reasons.map(({ run }) => run),
  }
}

const NOISY = { windMps: 1, noiseMps: 0.05 }

/** The runs with the second one's speeds changed. */
const spoilt = (change: (speedMps: Float64Array, run: CoastRun) => Float64Array): CoastRun[] =>
  bothWays(NOISY).map((run, r) => (r === 1 ? { ...run, speedMps: change(run.speedMps, run) } : run))

const part = (run: CoastRun, isKept: (i: number) => boolean): CoastRun => ({
  ...run,
  timeS: run.timeS.filter((_, i) => isKept(i)),
  speedMps: run.speedMps.filter((_, i) => isKept(i)),
})

it('sound runs are not refused', () => {
  for (let seed = 1; seed <= 40; seed++) expect(reasonsOf(testOf(bothWays(NOISY, seed))).text).toBe('')
  // To whole km/h, as a display shows them; and ten rows a second.
  const rounded = bothWays().map((run) => ({ ...run, speedMps: run.speedMps.map((v) => Math.round(v * 3.6) / 3.6) }))
  expect(reasonsOf(testOf(rounded)).text).toBe('')
  expect(reasonsOf(testOf(bothWays({ ...NOISY, stepS: 0.1, noiseMps: 0.1 }))).text).toBe('')
})

describe('runs that identify nothing are refused with the reason in words:', () => {
  it('one direction, unless slope and wind are known', () => {
    const runs = [coastRun(1), coastRun(1)]
    const refused = reasonsOf(testOf(runs))
    expect(refused.codes).toEqual(['one-direction'])
    expect(refused.text).toContain('2 of 2 runs go one way')
    expect(refused.text).toContain('the grade and the wind')
    const half = runs.map((run) => ({ ...measured(run, 0, 0), headwindMps: null }))
    expect(reasonsOf(testOf(half)).text).toContain('or the wind along it')
    expect(reasonsOf(testOf(runs.map((run) => measured(run, 0, 0)))).codes).toEqual([])
  })

  it('too narrow a span, with the one that is needed', () => {
    const refused = reasonsOf(testOf(bothWays({ ...NOISY, fromKmh: 80, toKmh: 62 })))
    expect(refused.codes[0]).toBe('narrow-span')
    const [, from, to, needFrom, needTo] =
      /falls from (\d+) to (\d+) km\/h.*about (\d+) down to (\d+) km\/h would tell/.exec(refused.text) ?? []
    expect([from, to, needFrom].map(Number)).toEqual([80, 62, 80])
    const needed = Number(needTo)
    expect(needed).toBeGreaterThanOrEqual(10)
    expect(needed).toBeLessThan(55)
    // What it asks for is enough, and half of the extra fall is not.
    expect(reasonsOf(testOf(bothWays({ ...NOISY, toKmh: needed - 5 }))).codes).toEqual([])
    expect(reasonsOf(testOf(bothWays({ ...NOISY, toKmh: (needed + 62) / 2 }))).codes[0]).toBe('narrow-span')
  })

  it('a correlation beyond 0.97', () => {
    const refused = reasonsOf(testOf(bothWays({ noiseMps: 1e-4, fromKmh: 80, toKmh: 60 })))
    expect(refused.codes).toEqual(['narrow-span', 'correlated'])
    expect(refused.text).toMatch(/correlation of -0\.9[789]\d; expected within ±0\.97/)
  })

  it('intervals wider than their values', () => {
    const refused = reasonsOf(testOf(bothWays({ noiseMps: 3, stepS: 10 }).slice(0, 2)))
    expect(refused.codes).toContain('wide-interval')
    expect(refused.text).toMatch(/comes out at -?[\d.]+ ± [\d.]+/)
  })

  it('a run that is driven again', () => {
    const refused = reasonsOf(testOf(spoilt((speeds) => speeds.map((v, i) => (i > 100 ? v + 0.2 * (i - 100) : v)))))
    expect([refused.codes[0], refused.runs[0]]).toEqual(['speed-rises', 1])
    expect(refused.text).toMatch(/rises by [\d.]+ km\/h up to 1\d\d\.\d s/)
  })

  it('a touch of the brakes', () => {
    const refused = reasonsOf(
      testOf(spoilt((speeds) => speeds.map((v, i) => v - 0.3 * Math.min(Math.max(i - 100, 0), 10)))),
    )
    expect([refused.codes[0], refused.runs[0]]).toEqual(['braked', 1])
    expect(refused.text).toMatch(/jumps from 0\.\d\d to 0\.[2-4]\d m\/s² at 1[01]\d\.\d s/)
  })

  it('a gap in the log', () => {
    const runs = bothWays(NOISY).map((run, r) => (r === 2 ? part(run, (i) => i < 50 || i > 70) : run))
    const refused = reasonsOf(testOf(runs))
    expect([refused.codes, refused.runs]).toEqual([['gap'], [2]])
    expect(refused.text).toContain('a gap of 22.0 s after 49.0 s')
  })

  it('too few rows, in a run or in all', () => {
    const few = bothWays(NOISY).map((run, r) => (r === 0 ? part(run, (i) => i < 7) : run))
    expect(reasonsOf(testOf(few))).toMatchObject({ codes: ['too-few-rows'], runs: [0] })
    const alone = measured(
      part(coastRun(1, { stepS: 20 }), (i) => i < 8),
      0,
      0,
    )
    const all = reasonsOf(testOf([alone]))
    expect(all.codes).toEqual(['too-few-rows'])
    expect(all.text).toBe('8 rows for 3 unknowns; expected at least 11')
  })

  it('speeds that no coasting car has', () => {
    const noise = bothWays({ noiseMps: 0.05 }).map((run) => ({ ...run, speedMps: run.speedMps.map(() => 15) }))
    expect(reasonsOf(testOf(noise)).codes.length).toBeGreaterThan(0)
  })
})

it('a hill that was measured is no brake, one that was not is', () => {
  // 2 % up from the 60th to the 70th second: 0.2 m/s² more.
  const hill = (timeS: number): number => (timeS >= 60 && timeS <= 70 ? 0.02 : 0)
  const runs = ([1, -1] as const).map((direction) => slopingRun(direction, hill))
  const blind = runs.map((run) => ({ ...run, gradeRad: run.timeS.map(() => 0) }))
  expect(reasonsOf(testOf(runs)).codes).toEqual([])
  expect(reasonsOf(testOf(blind)).codes).toEqual(['braked', 'braked'])
})

describe('a wrong argument is refused by name:', () => {
  const runs = bothWays()
  const [first, ...rest] = runs
  it.each<[string, CoastTest]>([
    ['car.massKg', testOf(runs, { ...CAR, massKg: Number.NaN })],
    ['car.densityKgM3', testOf(runs, { ...CAR, densityKgM3: 0 })],
    ['car.rotatingFactor', testOf(runs, { ...CAR, rotatingFactor: 0.9 })],
    ['linear.sdPerMps', { ...testOf(runs), linear: { rollingPerMps: 0, sdPerMps: -1 } }],
    ['runs', testOf([])],
    ['runs[0].timeS[3]', testOf([{ ...first, timeS: first.timeS.map((t, i) => (i === 3 ? 1 : t)) }, ...rest])],
    [
      'runs[0].speedMps[5]',
      testOf([{ ...first, speedMps: first.speedMps.map((v, i) => (i === 5 ? NaN : v)) }, ...rest]),
    ],
    ['runs[0].speedMps', testOf([{ ...first, speedMps: first.speedMps.slice(1) }, ...rest])],
    ['runs[1].gradeRad', testOf([{ ...first, gradeRad: first.timeS }, ...rest])],
  ])('%s', (field, test) => {
    expect(() => fitCoastDown(test)).toThrowError(expect.objectContaining({ field }))
  })
})
