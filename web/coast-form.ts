/** What a person says beside a logged coast-down, as typed. */
export interface CoastForm {
  massKg: string
  temperatureC: string
  pressureHpa: string
  humidityPct: string
  gradePct: string
  windAlongMps: string
  /** The runs go there and back in turn, without a column that says it. */
  isAlternate: boolean
}

export const EMPTY_COAST: CoastForm = {
  massKg: '',
  temperatureC: '',
  pressureHpa: '',
  humidityPct: '',
  gradePct: '',
  windAlongMps: '',
  isAlternate: false,
}

const NUMBERS = ['massKg', 'temperatureC', 'pressureHpa', 'humidityPct', 'gradePct', 'windAlongMps'] as const

/** What must still be said before a log can be read; null when nothing is. */
export function missingAir({ temperatureC, pressureHpa }: CoastForm): string | null {
  if (temperatureC.trim() !== '' && pressureHpa.trim() !== '') return null
  return 'Air temperature and pressure at the test come first: drag area follows from force by the density of the air.'
}

/** The query of a coast-down of a stored car; decimal commas become points, what is left empty is left out. */
export function coastQueryOf(form: CoastForm, carId: string): URLSearchParams {
  const query = new URLSearchParams(carId === '' ? {} : { car: carId })
  for (const name of NUMBERS) {
    const text = form[name].trim().replace(',', '.').replace('\u2212', '-')
    if (text !== '') query.set(name, text)
  }
  if (form.isAlternate) query.set('directions', 'alternate')
  return query
}

/** What a test puts into a car's body. */
export interface FittedBody {
  rollingCoefficient: number
  dragAreaM2: number
  rollingAtC?: number
}

interface Fitted {
  rollingCoefficient: { value: number }
  dragAreaM2: { value: number }
  temperatureC: number | null
}

/** Four digits, which is finer than any coast-down tells. */
const rounded = (value: number): number => Number(value.toPrecision(4))

/** Range of the air temperature at which a car states its rolling. [°C] */
const AT_C = { least: -20, most: 60 }

/** The figures that a result has for a car's body: rolling with the temperature it was found at, and drag area. */
export function fittedBody({ rollingCoefficient, dragAreaM2, temperatureC }: Fitted): FittedBody {
  return {
    rollingCoefficient: rounded(rollingCoefficient.value),
    dragAreaM2: rounded(dragAreaM2.value),
    ...(temperatureC === null ? {} : { rollingAtC: Math.min(Math.max(temperatureC, AT_C.least), AT_C.most) }),
  }
}

/** A car's document with a test's figures in its body, all else as it was; null where it has no body. */
export function withFittedBody(car: object, fitted: FittedBody): object | null {
  const body = bodyOf(car)
  return body === null ? null : { ...car, body: { ...body, ...fitted } }
}

/** The body of a car's document; null where it has none. */
export const bodyOf = (car: object): (Partial<FittedBody> & { massKg?: number }) | null =>
  'body' in car && typeof car.body === 'object' ? car.body : null
