import { z } from 'zod'
import { body } from './car-body.ts'
import { label, quantity, slug } from './quantity.ts'

/** Most rows of a test, all runs together, and most runs. */
export const MAX_COAST_ROWS = 100_000
export const MOST_COAST_RUNS = 60

const column = (min: number, max: number, meaning: string) => z.array(quantity(min, max, meaning)).max(MAX_COAST_ROWS)

/** One logged run with the motor disengaged and the brakes off. */
export const coastRun = z
  .strictObject({
    name: label('name of the run').optional(),
    direction: z.enum(['there', 'back']).describe('way along the road'),
    timeS: column(0, 1e10, 'time, from any moment on [s]').min(1),
    speedKmh: column(0, 300, 'speed over the ground [km/h]').min(1),
    gradePct: column(-30, 30, 'slope in the direction of the run, up positive [%]').optional(),
    headwindMps: column(-40, 40, 'wind at the car against it, positive [m/s]').optional(),
    crosswindMps: column(-40, 40, 'wind at the car across it [m/s]').optional(),
  })
  .superRefine((run, context) => {
    const rows = run.timeS.length
    for (const name of ['speedKmh', 'gradePct', 'headwindMps', 'crosswindMps'] as const) {
      const given = run[name]
      if (given !== undefined && given.length !== rows)
        context.addIssue({ code: 'custom', path: [name], message: `${rows} entries, as timeS has`, input: given })
    }
    const i = run.timeS.findIndex((time, k) => k > 0 && time <= run.timeS[k - 1])
    if (i > 0)
      context.addIssue({
        code: 'custom',
        path: ['timeS', i],
        message: `more than ${run.timeS[i - 1]}: times rise from row to row`,
        input: run.timeS[i],
      })
  })

/** The air at the test. */
export const testAir = z
  .strictObject({
    temperatureC: quantity(-40, 60, 'air temperature [°C]').optional(),
    pressureHpa: quantity(400, 1100, 'pressure at the place, not reduced to the sea [hPa]').optional(),
    humidityPct: quantity(0, 100, 'relative humidity [%]').default(50),
    densityKgM3: quantity(0.4, 2, 'density, where it is known; goes before the others [kg/m³]').optional(),
  })
  .refine(
    ({ temperatureC, pressureHpa, densityKgM3 }) =>
      densityKgM3 !== undefined || (temperatureC !== undefined && pressureHpa !== undefined),
    'temperatureC and pressureHpa, or densityKgM3: drag area follows from force by the density of the air',
  )

const carShape = body.shape

/** What is known beside the runs. */
export const coastTest = z.strictObject({
  car: z
    .strictObject({ id: slug('a stored car') })
    .optional()
    .describe('car whose mass, rotating factor, linear rolling term and tyres hold where they are not given'),
  massKg: carShape.massKg.describe('mass on the day, with crew and ballast [kg]').optional(),
  rotatingFactor: carShape.rotatingFactor.unwrap().optional(),
  air: testAir,
  rollingPerKmh: carShape.rollingPerKmh
    .unwrap()
    .describe('linear term of the rolling coefficient: what it is held at, or expected to be [h/km]')
    .optional(),
  rollingPerKmhSd: quantity(0, 0.001, 'how well the linear term is known; 0 holds it fixed [h/km]').default(0),
  rollingPctPerC: carShape.rollingPctPerC.unwrap().optional(),
  gradePct: quantity(-10, 10, 'steady slope, up on the way there; left out: found from both ways [%]').optional(),
  windAlongMps: quantity(
    -40,
    40,
    'steady wind at the car along the road, against the runs there; left out: found from both ways [m/s]',
  ).optional(),
})

type Say = (path: (string | number)[], message: string, input: unknown) => void

const sayTo =
  (context: z.RefinementCtx): Say =>
  (path, message, input) =>
    context.addIssue({ code: 'custom', path, message, input })

const runList = z.array(coastRun).min(1).max(MOST_COAST_RUNS)

/** What the runs of one test must have in common. */
function checkTogether(runs: z.output<typeof runList>, say: Say): void {
  const rows = runs.reduce((sum, { timeS }) => sum + timeS.length, 0)
  if (rows > MAX_COAST_ROWS) say(['runs'], `at most ${MAX_COAST_ROWS} rows in all runs together`, rows)
  for (const name of ['gradePct', 'headwindMps'] as const) {
    const i = runs.findIndex((run) => (run[name] === undefined) !== (runs[0][name] === undefined))
    if (i >= 0) say(['runs', i, name], 'this column in every run, or in none', runs[i][name])
  }
  runs.forEach((run, i) => {
    if (run.crosswindMps !== undefined && run.headwindMps === undefined)
      say(['runs', i, 'headwindMps'], 'the headwind beside the crosswind', undefined)
  })
}

/** The runs of a test alone, as a file holds them. */
export const coastRuns = z
  .strictObject({ runs: runList })
  .superRefine(({ runs }, context) => checkTogether(runs, sayTo(context)))

/** A coast-down test: the car and the air, and the logged runs. */
export const coastDownRequest = z
  .strictObject({ ...coastTest.shape, runs: runList })
  .superRefine(({ runs, massKg, car, gradePct, windAlongMps }, context) => {
    const say = sayTo(context)
    checkTogether(runs, say)
    if (massKg === undefined && car === undefined) say(['massKg'], 'the mass on the day, or a stored car', undefined)
    if (gradePct !== undefined && runs.some((run) => run.gradePct !== undefined))
      say(['gradePct'], 'the slope once: of the whole road, or in the runs', gradePct)
    if (windAlongMps !== undefined && runs.some((run) => run.headwindMps !== undefined))
      say(['windAlongMps'], 'the wind once: of the whole test, or in the runs', windAlongMps)
  })
  .meta({ title: 'Coast-down test' })

export type CoastDownRequest = z.output<typeof coastDownRequest>
export type CoastDownInput = z.input<typeof coastDownRequest>
export type CoastRunDocument = z.output<typeof coastRun>
export type CoastRunsDocument = z.output<typeof coastRuns>
export type CoastRunsInput = z.input<typeof coastRuns>
