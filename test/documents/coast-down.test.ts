import { describe, expect, it } from 'vitest'
import { carExample } from '../../server/api/examples/car.ts'
import { coastExample } from '../../server/api/examples/coast-down.ts'
import { carDocument } from '../../server/documents/car.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { type CoastDownInput, coastDownRequest } from '../../server/documents/coast-down.ts'
import { coastDownAnswer, type TestCar } from '../../server/documents/coast-down-answer.ts'
import { testDensityKgM3 } from '../../server/documents/coast-down-model.ts'
import type { CoastDownDocument } from '../../server/documents/coast-down-result.ts'
import { bothWays, measured } from '../engine/coast-runs.ts'

const answerTo = (input: CoastDownInput, car: TestCar | null = null) => {
  const { document, problems } = checkDocument(coastDownRequest, input)
  if (problems !== undefined) throw new Error(JSON.stringify(problems))
  return coastDownAnswer(document, car)
}

function resultOf(input: CoastDownInput, car: TestCar | null = null): CoastDownDocument {
  const { result, refused } = answerTo(input, car)
  if (result === undefined) throw new Error(JSON.stringify(refused))
  return result
}

/** The invented car's runs as a document, in air of 1.17 kg/m³. */
const invented = (coasting: Parameters<typeof bothWays>[0], seed = 1): CoastDownInput => ({
  massKg: 250,
  air: { densityKgM3: 1.17 },
  runs: bothWays(coasting, seed).map(({ direction, timeS, speedMps }) => ({
    direction: direction === 1 ? 'there' : 'back',
    timeS: [...timeS],
    speedKmh: Array.from(speedMps, (mps) => mps * 3.6),
  })),
})

const problemsOf = (input: unknown) => checkDocument(coastDownRequest, input).problems ?? []
const fieldsOf = (input: unknown): string[] => problemsOf(input).map(({ field }) => field)

describe('a coast-down test', () => {
  it('of the worked example gives what its runs were drawn from: 0.0041 and 0.118 m², wind 1.2 m/s, slope 0.06 %', () => {
    const { rollingCoefficient, dragAreaM2, wind, grade, noise, correlation } = resultOf(coastExample)
    expect(rollingCoefficient.low).toBeLessThan(0.0041)
    expect(rollingCoefficient.high).toBeGreaterThan(0.0041)
    expect(dragAreaM2.low).toBeLessThan(0.118)
    expect(dragAreaM2.high).toBeGreaterThan(0.118)
    expect(Math.abs(wind.alongMps - 1.2)).toBeLessThan(3 * wind.alongSdMps)
    expect(Math.abs(grade.pct - 0.06)).toBeLessThan(3 * grade.sdPct)
    // Drawn with 0.05 m/s.
    expect(noise.kmh).toBeCloseTo(0.18, 1)
    expect(correlation).toBeLessThan(-0.85)
  })

  it('says where wind and slope come from', () => {
    const found = resultOf(invented({ windMps: 2, noiseMps: 0.05 }))
    expect([found.wind.source, found.grade.source]).toEqual(['found', 'found'])
    const stated = resultOf({
      ...invented({ windMps: 2, grade: 0.001, noiseMps: 0.05 }),
      windAlongMps: 2,
      gradePct: 0.1,
    })
    expect(stated.wind).toMatchObject({ source: 'stated', alongMps: 2, alongSdMps: 0, acrossMps: null })
    expect(stated.grade.source).toBe('stated')
    expect(stated.grade.pct).toBeCloseTo(0.1, 9)
    expect(stated.rollingCoefficient.value / 0.0035).toBeCloseTo(1, 1)
    const columns = invented({ windMps: 2, noiseMps: 0.05 })
    const runs = columns.runs.map((run) => {
      const sign = run.direction === 'there' ? 1 : -1
      const like = (value: number) => run.timeS.map(() => value)
      return { ...run, headwindMps: like(2 * sign), crosswindMps: like(-1.5), gradePct: like(0) }
    })
    const { wind, grade } = resultOf({ ...columns, runs })
    expect(wind).toMatchObject({ source: 'measured', acrossMps: 1.5 })
    expect(wind.alongMps).toBeCloseTo(2, 9)
    expect(grade).toMatchObject({ source: 'measured', pct: 0 })
  })

  it('states the wind’s part: ½ρCdA·w² of 3 m/s is 0.53 N, 6 % of rolling', () => {
    // By hand: 0.5 · 1.17 · 0.1 · 9 = 0.5265 N; 250 · 9.80665 · 0.0035 = 8.58 N.
    const { wind } = resultOf(invented({ windMps: 3, noiseMps: 0.02 }))
    expect(wind.biasN).toBeCloseTo(0.5265, 1)
    expect(wind.biasPct).toBeCloseTo(6.1, 0)
  })

  it('holds 60, 80 and 100 km/h in reference air with the forces of the invented car', () => {
    // By hand, in air of 1.167 kg/m³: F0 8.58 N, F2 0.0584 N·s²/m²; at 80 km/h 8.58 + 28.82 = 37.40 N, 831 W at the wheels.
    const { reference } = resultOf(invented({ noiseMps: 0.005 }))
    const at80 = reference.holding.find(({ speedKmh }) => speedKmh === 80)
    expect(at80?.forceN).toBeCloseTo(37.4, 1)
    expect(Math.abs((at80?.powerW ?? 0) - 831)).toBeLessThan(1)
    expect(reference.F2NPerKmh2 * 3.6 ** 2).toBeCloseTo(0.05835, 4)
    expect(reference.rollingFactor).toBe(1)
  })

  it('brings rolling to 20 °C where the tyres are known: 0.86 % for each °C, 10 °C warmer on the day', () => {
    // By hand: 1 + 0.0086 · (30 − 20) = 1.086.
    const air = { temperatureC: 30, densityKgM3: 1.17 }
    const { reference } = resultOf({ ...invented({ noiseMps: 0.01 }), air, rollingPctPerC: 0.86 })
    expect(reference.rollingFactor).toBeCloseTo(1.086, 9)
    expect(reference.F0N / (1.086 * 8.58)).toBeCloseTo(1, 2)
  })

  it('takes mass, turning parts, linear term and tyres of a stored car, and what is given over them', () => {
    const document = carDocument.parse(carExample)
    const car: TestCar = { id: 'weaver-2', version: 4, document }
    const { massKg: _, ...rest } = coastExample
    const by = resultOf({ ...rest, rotatingFactor: undefined, car: { id: 'weaver-2' } }, car)
    expect(by).toMatchObject({
      car: { id: 'weaver-2', version: 4, name: 'Weaver 2' },
      massKg: 248,
      rotatingFactor: 1.03,
    })
    expect(by.rollingPerKmh).toMatchObject({ isHeld: true, sd: 0 })
    expect(by.rollingPerKmh.value).toBeCloseTo(0.000008, 12)
    // By hand: warmer by 18 − 20 = −2 °C at 0.86 %/°C.
    expect(by.reference.rollingFactor).toBeCloseTo(1 - 0.0172, 9)
    expect(resultOf({ ...coastExample, massKg: 300 }, car).massKg).toBe(300)
  })

  it('keeps at most 300 rows of a run for its picture, residuals being logged less fitted', () => {
    const result = resultOf(invented({ stepS: 0.2, noiseMps: 0.05 }))
    for (const run of result.runs) {
      expect(run.rows).toBeGreaterThan(600)
      expect(run.timeS.length).toBeLessThanOrEqual(300)
      for (const [i, left] of run.residualKmh.entries())
        expect(run.measuredKmh[i] - run.fittedKmh[i]).toBeCloseTo(left, 9)
    }
    expect(result.runs.map(({ name }) => name)).toEqual(['run 1, there', 'run 2, back', 'run 3, there', 'run 4, back'])
  })

  it('leaves out the slow end of a run, and says so', () => {
    const test = invented({ noiseMps: 0.02, toKmh: 6 })
    const runs = test.runs.map((run) => ({
      ...run,
      timeS: [...run.timeS, ...[1, 2, 3].map((s) => (run.timeS.at(-1) ?? 0) + s)],
      speedKmh: [...run.speedKmh, 4, 0, 0],
    }))
    const result = resultOf({ ...test, runs })
    expect(result.warnings).toContain('12 rows from 5 km/h down were left out.')
    expect(result.noise.rows).toBe(test.runs.reduce((sum, run) => sum + run.timeS.length, 0))
    expect(result.rollingCoefficient.value / 0.0035).toBeCloseTo(1, 1)
  })

  it('is timed by an epoch as well as from 0', () => {
    const test = invented({ noiseMps: 0.05 })
    const shifted = test.runs.map((run) => ({ ...run, timeS: run.timeS.map((time) => time + 1_792_215_000) }))
    expect(resultOf({ ...test, runs: shifted }).dragAreaM2.value).toBeCloseTo(resultOf(test).dragAreaM2.value, 9)
  })
})

describe('the air at the test', () => {
  it('is dense by temperature, pressure and humidity: 1.1839 kg/m³ at 25 °C, 1013.25 hPa, dry', () => {
    // Printed in the usual tables of dry air (from memory): 1.1839 at 25 °C, 1.2041 at 20 °C.
    expect(testDensityKgM3({ temperatureC: 25, pressureHpa: 1013.25, humidityPct: 0 })).toBeCloseTo(1.1839, 3)
    expect(testDensityKgM3({ temperatureC: 20, pressureHpa: 1013.25, humidityPct: 0 })).toBeCloseTo(1.2041, 3)
    expect(testDensityKgM3({ temperatureC: 20, pressureHpa: 1013.25, humidityPct: 50, densityKgM3: 1.1 })).toBe(1.1)
  })

  it('must be known', () => {
    const { air: _, ...rest } = coastExample
    expect(fieldsOf(rest)).toEqual(['air'])
    const [problem] = problemsOf({ ...rest, air: { temperatureC: 20 } })
    expect(problem.field).toBe('air')
    expect(problem.detail).toContain('temperatureC and pressureHpa, or densityKgM3')
  })
})

describe('a warning is given', () => {
  const warningsOf = (wind: { along: number; across?: number }): string => {
    const test = invented({ windMps: wind.along, noiseMps: 0.05 })
    const runs = test.runs.map((run) => {
      const sign = run.direction === 'there' ? 1 : -1
      const { across } = wind
      const headwindMps = run.timeS.map(() => sign * wind.along)
      return { ...run, headwindMps, ...(across === undefined ? {} : { crosswindMps: run.timeS.map(() => across) }) }
    })
    return resultOf({ ...test, runs }).warnings.join('\n')
  }

  it('of wind over 16 km/h and crosswind over 8 km/h, the limits of SAE J1263', () => {
    expect(warningsOf({ along: 4.6, across: 0 })).toContain('Wind of 16.6 km/h: SAE J1263 tests up to 16 km/h')
    expect(warningsOf({ along: 4.3, across: 0 })).not.toContain('Wind of')
    expect(warningsOf({ along: 0, across: 2.3 })).toContain('Crosswind of 8.3 km/h: SAE J1263 tests up to 8 km/h')
    expect(warningsOf({ along: 0, across: 2.2 })).not.toContain('Crosswind of')
    expect(warningsOf({ along: 0 })).toContain('No crosswind in the file')
  })

  it('of runs that are not as many each way', () => {
    const test = invented({ noiseMps: 0.05 })
    expect(resultOf({ ...test, runs: test.runs.slice(0, 3) }).warnings.join()).toContain('2 runs there and 1 back')
    expect(resultOf(test).warnings.join()).not.toContain('runs there and')
  })

  it('of a steep road and of rows far off', () => {
    expect(resultOf(invented({ noiseMps: 0.05, grade: 0.0025 })).warnings.join()).toContain(
      'A slope of 0.25 % was found',
    )
    const test = invented({ noiseMps: 0.05 })
    test.runs[1].speedKmh[40] += 3
    expect(resultOf(test).warnings.join()).toContain('1 row lies more than 5 standard deviations off')
  })
})

describe('runs that tell nothing', () => {
  it('are refused with the run’s name and the reason', () => {
    const test = invented({ noiseMps: 0.05 })
    const [first, second, ...others] = test.runs
    const driven = { ...second, name: 'Strip 2', speedKmh: second.speedKmh.map((v, i) => (i > 90 ? v + i - 90 : v)) }
    const { refused = [] } = answerTo({ ...test, runs: [first, driven, ...others] })
    expect(refused.map(({ field }) => field)).toEqual(['runs[1]'])
    expect(refused[0].detail).toMatch(/^Strip 2: the speed rises by /)
    expect(answerTo({ ...test, runs: [first] }).refused?.[0]).toMatchObject({ field: 'runs' })
  })
})

it('a stated wind and slope reach the engine as measured ones do', () => {
  const test = invented({ windMps: 1.5, grade: 0.0008, noiseMps: 0.05 })
  const stated = resultOf({ ...test, windAlongMps: 1.5, gradePct: 0.08 })
  const runs = bothWays({ windMps: 1.5, grade: 0.0008, noiseMps: 0.05 }).map((run) => measured(run, 0.0008, 1.5))
  const columns = test.runs.map((run, r) => ({
    ...run,
    headwindMps: [...(runs[r].headwindMps ?? [])],
    gradePct: Array.from(runs[r].gradeRad ?? [], (grade) => 100 * Math.tan(grade)),
  }))
  const { rollingCoefficient, dragAreaM2 } = resultOf({ ...test, runs: columns })
  expect(rollingCoefficient.value).toBeCloseTo(stated.rollingCoefficient.value, 9)
  expect(dragAreaM2.value).toBeCloseTo(stated.dragAreaM2.value, 8)
})

describe('a wrong test is refused by field:', () => {
  const [run, ...others] = coastExample.runs
  const withRun = (change: object) => ({ ...coastExample, runs: [{ ...run, ...change }, ...others] })
  it.each<[string, unknown]>([
    ['massKg', { ...coastExample, massKg: undefined }],
    ['massKg', { ...coastExample, massKg: 5 }],
    ['runs', { ...coastExample, runs: [] }],
    ['runs[0].timeS[2]', withRun({ timeS: run.timeS.with(2, 5) })],
    ['runs[0].speedKmh', withRun({ speedKmh: run.speedKmh.slice(1) })],
    ['runs[0].speedKmh[3]', withRun({ speedKmh: run.speedKmh.with(3, 301) })],
    ['runs[0].direction', withRun({ direction: 'up' })],
    ['runs[1].gradePct', withRun({ gradePct: run.timeS.map(() => 0) })],
    ['runs[0].headwindMps', withRun({ crosswindMps: run.timeS.map(() => 0) })],
    ['runs[0].mood', withRun({ mood: 1 })],
    ['car.id', { ...coastExample, car: { id: 'No Such' } }],
    ['rollingPerKmhSd', { ...coastExample, rollingPerKmhSd: -1 }],
    [
      'gradePct',
      { ...coastExample, gradePct: 0, runs: coastExample.runs.map((r) => ({ ...r, gradePct: r.timeS.map(() => 0) })) },
    ],
    [
      'windAlongMps',
      {
        ...coastExample,
        windAlongMps: 0,
        runs: coastExample.runs.map((r) => ({ ...r, headwindMps: r.timeS.map(() => 0) })),
      },
    ],
  ])('%s', (field, input) => expect(fieldsOf(input)).toContain(field))
})
