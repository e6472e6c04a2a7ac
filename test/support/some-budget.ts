import type { BudgetDocument, DayBudget } from '../../server/documents/budget.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { type ForecastRequest, forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { InputError } from '../../server/engine/input-error.ts'
import { someCar, someRace, someRoute, someSky } from './scenario.ts'

/** The documents of a forecast, to be changed before they are checked. */
export interface Request {
  car: ReturnType<typeof someCar>
  race: ReturnType<typeof someRace>
  routes: Record<string, ReturnType<typeof someRoute>>
  sky: ReturnType<typeof someSky>
  speeds: unknown
  date?: string
  learned?: Record<string, object>
}

/** The usual scenario after a change, checked. */
export function checkedRequest(change: (request: Request) => void = () => undefined): ForecastRequest {
  const request: Request = {
    car: someCar(),
    race: someRace(),
    routes: { road: someRoute(200, 200) },
    sky: someSky(),
    speeds: { kind: 'constant', speedKmh: 75 },
  }
  change(request)
  const { document, problems } = checkDocument(forecastRequest, request)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return document
}

/** The budget of the usual scenario after a change. */
export const budget = (change?: (request: Request) => void): BudgetDocument => forecastDocuments(checkedRequest(change))

export const oneDay = (change?: (request: Request) => void): DayBudget => budget(change).days[0]

/** The fault that a request ends in. */
export function fault(change: (request: Request) => void): InputError {
  try {
    budget(change)
  } catch (error) {
    if (error instanceof InputError) return error
    throw error
  }
  throw new Error('no fault')
}

/** A second day, with the first cut short. */
export function twoDays(request: Request): void {
  const [day] = request.race.days
  day.driving = { from: '08:00', to: '09:30' }
  request.race.days.push({ ...day, date: '2026-10-18', driving: { from: '08:00', to: '17:00' }, stages: [] })
  const [place] = request.sky.places
  const stretch = <T>(column: T[]): T[] => [...column, ...column]
  place.at = [...place.at, ...place.at.map((at) => at.replace('10-17', '10-18'))]
  // Six hours between stamps at most: one more in the night.
  place.at.splice(15, 0, '2026-10-18T00:00:00+02:00')
  const night = <T>(column: T[] | undefined): T[] => {
    const twice = stretch(column ?? [])
    twice.splice(15, 0, twice[0])
    return twice
  }
  place.cloudPct = night(place.cloudPct)
  place.airTempC = night(place.airTempC)
  place.windMps = night(place.windMps)
  place.windFromDeg = night(place.windFromDeg)
}
