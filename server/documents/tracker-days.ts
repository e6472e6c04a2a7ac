import { z } from 'zod'
import { ENGINE_VERSION } from '../engine/version.ts'
import { drivenRace, type ForecastRequest } from './forecast.ts'
import { toldText } from './told-words.ts'
import { trackerDay, trackerDayOf } from './tracker-day.ts'
import { benchFit } from './tracker-model.ts'

/** Every tracker of a car through the days of a race. */
export const trackerDays = z
  .strictObject({
    engineVersion: z.string(),
    race: z.string(),
    car: z.string(),
    assumptions: z.array(z.string()).describe('what was assumed where the documents are silent'),
    benches: z
      .array(
        z.strictObject({
          tracker: z.string(),
          rmsW: z.number().describe('root mean square of what four terms leave of the bench [W]'),
          told: z.string().describe('which losses the bench tells, singly or together'),
        }),
      )
      .describe('trackers with a bench'),
    days: z.array(trackerDay),
  })
  .meta({ title: 'Tracker report' })

export type TrackerDaysDocument = z.output<typeof trackerDays>

/**
 * The tracker report of whole documents.
 *
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function trackerDaysOf(request: ForecastRequest): TrackerDaysDocument {
  const { days, assumptions } = drivenRace(request, trackerDayOf)
  return {
    engineVersion: ENGINE_VERSION,
    race: request.race.name,
    car: request.car.name,
    assumptions,
    benches: request.car.trackers.flatMap((tracker) => {
      const fit = benchFit(tracker)
      return fit === null ? [] : [{ tracker: tracker.name, rmsW: fit.rmsW, told: toldText(fit.told) }]
    }),
    days,
  }
}
