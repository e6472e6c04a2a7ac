/** A unit a column may have: value in the document's unit = value × factor + offset. */
export interface Unit {
  /** As people are told. */
  name: string
  factor: number
  offset?: number
  /** The value is an energy of the row's interval; over its seconds it becomes a power. */
  isPerInterval?: true
  /** How it may be written, compact: small letters without spaces, signs and powers. */
  spellings: string[]
}

const unit = (name: string, factor: number, spellings: string[], more: Partial<Unit> = {}): Unit => ({
  name,
  factor,
  spellings,
  ...more,
})

const perInterval = { isPerInterval: true } as const

const PERCENT = unit('%', 1, ['%', 'pct', 'percent', '0100', '0100%'])
const SHARE = unit('0..1', 100, ['01', '1', 'fraction', 'share', '0to1'])
const DEGREES = ['deg', 'degree', 'degrees', 'dd', 'decimaldegrees']

/** Units by the kind of quantity, the document's own unit first. Exact by definition: SI Brochure 2019, NIST SP 811. */
export const UNITS = {
  latitude: [unit('°', 1, [...DEGREES, 'degn', 'degreesnorth', 'degreenorth', 'n'])],
  longitude: [unit('°', 1, [...DEGREES, 'dege', 'degreeseast', 'degreeeast', 'e'])],
  height: [
    unit('m', 1, ['m', 'meter', 'meters', 'metre', 'metres', 'masl', 'mamsl']),
    unit('ft', 0.3048, ['ft', 'feet', 'foot']),
    unit('km', 1000, ['km']),
  ],
  roadSpeed: [
    unit('km/h', 1, ['kmh', 'kmph', 'kph', 'kmh1']),
    unit('mph', 1.609344, ['mph', 'mih']),
    unit('m/s', 3.6, ['ms', 'mps', 'ms1']),
  ],
  perDistance: [
    unit('1/km', 1, ['1km', 'km1', 'perkm', 'km']),
    unit('1/mile', 1 / 1.609344, ['1mile', '1mi', 'permile']),
  ],
  factor: [unit('factor', 1, ['1', 'factor'])],
  irradiance: [
    unit('W/m²', 1, ['wm2', 'wperm2', 'wattm2']),
    unit('kW/m²', 1000, ['kwm2']),
    unit('J/m²', 1, ['jm2'], perInterval),
    unit('kJ/m²', 1000, ['kjm2'], perInterval),
    unit('MJ/m²', 1e6, ['mjm2'], perInterval),
    unit('J/cm²', 1e4, ['jcm2'], perInterval),
    unit('Wh/m²', 3600, ['whm2'], perInterval),
    unit('kWh/m²', 3.6e6, ['kwhm2'], perInterval),
  ],
  cloud: [
    PERCENT,
    unit('oktas', 12.5, ['okta', 'oktas', 'octa', 'octas', '8', '8ths', 'eighths', '08']),
    unit('tenths', 10, ['tenth', 'tenths', '10', '10ths', '010']),
    SHARE,
  ],
  temperature: [
    unit('°C', 1, ['c', 'degc', 'degreesc', 'celsius', 'degcelsius', 'degreescelsius']),
    unit('°F', 5 / 9, ['f', 'degf', 'degreesf', 'fahrenheit', 'degfahrenheit'], { offset: -160 / 9 }),
    unit('K', 1, ['k', 'kelvin', 'degk'], { offset: -273.15 }),
  ],
  humidity: [PERCENT, SHARE],
  windSpeed: [
    unit('m/s', 1, ['ms', 'mps', 'ms1']),
    unit('km/h', 1 / 3.6, ['kmh', 'kmph', 'kph', 'kmh1']),
    unit('kn', 1852 / 3600, ['kn', 'kt', 'kts', 'knot', 'knots']),
    unit('mph', 0.44704, ['mph', 'mih']),
  ],
  direction: [unit('°', 1, [...DEGREES, 'degfrom', 'from', 'degtrue', 'true', 'degt', 'compass', 'degn'])],
  pressure: [
    unit('hPa', 1, ['hpa', 'mbar', 'mb', 'millibar']),
    unit('Pa', 0.01, ['pa']),
    unit('kPa', 10, ['kpa']),
    unit('mmHg', 1.33322387415, ['mmhg', 'torr']),
    unit('inHg', 33.86389, ['inhg']),
  ],
  turbidity: [unit('Linke', 1, ['1', 'linke', 'tl'])],
  duration: [
    unit('s', 1, ['s', 'sec', 'secs', 'second', 'seconds']),
    unit('ms', 0.001, ['ms', 'msec', 'millisecond', 'milliseconds']),
    unit('min', 60, ['min', 'mins', 'minute', 'minutes']),
  ],
  slope: [
    unit('%', 1, ['%', 'pct', 'percent']),
    unit('‰', 0.1, ['permille', 'permil', 'mmm']),
    unit('m/m', 100, ['1', 'mm', 'fraction']),
  ],
  time: [],
  text: [],
} as const satisfies Record<string, readonly Unit[]>

export type UnitKind = keyof typeof UNITS

/** A unit as written, in the form that spellings have: `W m⁻²`, `W/m^2` and `Wm-2` are one. */
export const compactUnit = (text: string): string =>
  text
    .replace(/[º˚]/g, '°')
    .normalize('NFKC')
    .toLowerCase()
    .replace(/°/g, 'deg')
    .replace(/per\s/g, '/')
    .replace(/[^a-z0-9%]/g, '')

export function unitNamed(kind: UnitKind, text: string): Unit | undefined {
  const compact = compactUnit(text)
  return (UNITS[kind] as readonly Unit[]).find(({ spellings }) => spellings.includes(compact))
}

/** The units of a kind in words: `W/m², kW/m² or J/m²`. */
export const unitsOf = (kind: UnitKind): string => inWords(UNITS[kind].map(({ name }) => name))

export const inWords = (names: string[], last = 'or'): string =>
  names.length < 2 ? (names[0] ?? 'none') : `${names.slice(0, -1).join(', ')} ${last} ${names[names.length - 1]}`
