import { describe, expect, it } from 'vitest'
import { carExample } from '../../server/api/examples/car.ts'
import { coastExample } from '../../server/api/examples/coast-down.ts'
import { carDocument } from '../../server/documents/car.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { coastDownRequest } from '../../server/documents/coast-down.ts'
import { coastDownAnswer } from '../../server/documents/coast-down-answer.ts'
import type { CoastDownDocument } from '../../server/documents/coast-down-result.ts'
import { residualAxes, residualPaths } from '../../web/charts/residual-paths.ts'
import { coastQueryOf, EMPTY_COAST, fittedBody, missingAir, withFittedBody } from '../../web/coast-form.ts'
import {
  biasWords,
  coastSentence,
  gradeWords,
  linearWords,
  loadWords,
  runWords,
  spreadText,
  windWords,
} from '../../web/coast-words.ts'
import { spoken } from '../../web/sentence.ts'

const { result } = coastDownAnswer(coastDownRequest.parse(coastExample), null)
if (result === undefined) throw new Error('the worked example is refused')
const found: CoastDownDocument = result

const estimate = (value: number, half: number) => ({ value, sd: half / 2, low: value - half, high: value + half })

describe('a number with its spread', () => {
  it.each([
    [0.004_123, 0.000_21, '0.0041 ± 0.0002'],
    [0.004_123, 0.000_12, '0.00412 ± 0.00012'],
    [0.1179, 0.0031, '0.118 ± 0.003'],
    [0.1179, 0.0199, '0.12 ± 0.02'],
    [1.234, 0.4, '1.2 ± 0.4'],
    [-0.05, 0.3, '\u22120.1 ± 0.3'],
    [12.3, 24, '12 ± 24'],
  ])('%d, give or take %d, is printed %s', (value, half, text) => expect(spreadText(value, half)).toBe(text))
})

describe('a coast-down in words', () => {
  const told: CoastDownDocument = {
    ...found,
    rollingCoefficient: estimate(0.0041, 0.0002),
    dragAreaM2: estimate(0.118, 0.003),
    correlation: -0.93,
  }

  it('is one sentence', () => {
    expect(spoken(coastSentence(told))).toBe(
      'Rolling 0.0041 ± 0.0002, drag area 0.118 ± 0.003\u202fm²; they pull against each other: correlation \u22120.93.',
    )
    expect(spoken(coastSentence({ ...told, correlation: -0.5 }))).toContain('m²; correlation \u22120.50.')
  })

  it('says where wind and slope come from, and which way', () => {
    const wind = { source: 'found' as const, alongMps: -1.2, alongSdMps: 0.05, acrossMps: null, biasN: 0.1, biasPct: 1 }
    expect(windWords({ ...told, wind })).toEqual({
      text: '1.20 ± 0.10',
      note: 'pushing the runs there, found from both ways',
    })
    expect(gradeWords({ ...told, grade: { source: 'stated', pct: 0.1, sdPct: 0 } })).toEqual({
      text: '0.10',
      note: 'up on the way there, as stated',
    })
    expect(biasWords({ ...told, wind })).toBe(
      'Wind squared slows both ways alike: 0.10 N, 1.0 % of rolling, is taken out.',
    )
    expect(biasWords({ ...told, wind: { ...wind, biasPct: 0.05 } })).toBeNull()
  })

  it('names a linear term that was held', () => {
    expect(linearWords(told)).toBeNull()
    const rollingPerKmh = { ...estimate(0.000_004, 0), isHeld: true }
    expect(linearWords({ ...told, rollingPerKmh })).toBe(
      'Rolling is that at rest; its rise with speed is held at 0.0000040 per km/h.',
    )
  })

  it('gives the road load as a formula and each run in a line', () => {
    const reference = { ...told.reference, F0N: 10.776, F1NPerKmh: 0, F2NPerKmh2: 0.005_312 }
    expect(loadWords({ ...told, reference })).toBe('10.78 + 0.00531·v²')
    expect(loadWords({ ...told, reference: { ...reference, F1NPerKmh: 0.0209 } })).toBe('10.78 + 0.0209·v + 0.00531·v²')
    expect(runWords(told.runs[0])).toMatch(/^82 to 15 km\/h in 215 s, 44 rows$/)
  })
})

describe('what is said beside a log', () => {
  const form = { ...EMPTY_COAST, temperatureC: '18,5', pressureHpa: ' 884 ' }

  it('goes into the query, decimal commas as points, what is empty left out', () => {
    const query = coastQueryOf({ ...form, gradePct: '\u22120,1', isAlternate: true }, 'weaver-2')
    expect(Object.fromEntries(query)).toEqual({
      car: 'weaver-2',
      temperatureC: '18.5',
      pressureHpa: '884',
      gradePct: '-0.1',
      directions: 'alternate',
    })
  })

  it('must name the air', () => {
    expect(missingAir(form)).toBeNull()
    expect(missingAir({ ...form, pressureHpa: ' ' })).toContain('Air temperature and pressure')
  })
})

describe('a car with a test’s figures', () => {
  it('is as it was but for rolling, its temperature and drag area', () => {
    const fitted = fittedBody({ ...found, rollingCoefficient: estimate(0.004_123_456, 1e-4), temperatureC: 18 })
    expect(fitted).toEqual({ rollingCoefficient: 0.004123, dragAreaM2: fitted.dragAreaM2, rollingAtC: 18 })
    const next = withFittedBody(carExample, fitted)
    expect(next).toEqual({ ...carExample, body: { ...carExample.body, ...fitted } })
    expect(checkDocument(carDocument, next).problems).toBeUndefined()
    expect(withFittedBody({ name: 'x' }, fitted)).toBeNull()
  })

  it('keeps its temperature where the test had none, and the range of a car', () => {
    expect(fittedBody({ ...found, temperatureC: null })).not.toHaveProperty('rollingAtC')
    expect(fittedBody({ ...found, temperatureC: -35 }).rollingAtC).toBe(-20)
  })
})

describe('the picture of what a fit leaves', () => {
  const axes = residualAxes({ width: 358, lastS: 215, mostKmh: 0.5, sdKmh: 0.2 })

  it('has 0 in the middle and every row inside', () => {
    expect(axes.y(0)).toBeCloseTo((axes.y(0.5) + axes.y(-0.5)) / 2, 9)
    expect(axes.y(0.5)).toBeGreaterThan(0)
    expect(axes.y(-0.5)).toBeLessThan(axes.base)
    expect(axes.x(215)).toBe(axes.right)
    expect(axes.sTicks).toEqual([0, 50, 100, 150, 200])
    expect(axes.limitKmh).toBe(0.4)
  })

  it('draws ordinary rows as dots and those far off as diamonds', () => {
    const { dots, diamonds } = residualPaths(axes, { timeS: [0, 1, 2], residualKmh: [0.1, -1.2, 0.2] }, 0.2)
    expect(dots.match(/M/g)).toHaveLength(2)
    expect(diamonds.match(/M/g)).toHaveLength(1)
  })
})
