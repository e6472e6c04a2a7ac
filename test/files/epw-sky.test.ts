import { describe, expect, it } from 'vitest'
import { readEpwSky } from '../../server/files/epw-sky.ts'

/**
 * Fields of a data line in their order.
 *
 * @source EnergyPlus, Auxiliary Programs, EPW Data Dictionary: N1–N5, A1, N6–N34 (order and missing codes from memory)
 */
const ORDER = [
  'Year',
  'Month',
  'Day',
  'Hour',
  'Minute',
  'Data Source and Uncertainty Flags',
  'Dry Bulb Temperature',
  'Dew Point Temperature',
  'Relative Humidity',
  'Atmospheric Station Pressure',
  'Extraterrestrial Horizontal Radiation',
  'Extraterrestrial Direct Normal Radiation',
  'Horizontal Infrared Radiation Intensity',
  'Global Horizontal Radiation',
  'Direct Normal Radiation',
  'Diffuse Horizontal Radiation',
  'Global Horizontal Illuminance',
  'Direct Normal Illuminance',
  'Diffuse Horizontal Illuminance',
  'Zenith Luminance',
  'Wind Direction',
  'Wind Speed',
  'Total Sky Cover',
  'Opaque Sky Cover',
  'Visibility',
  'Ceiling Height',
  'Present Weather Observation',
  'Present Weather Codes',
  'Precipitable Water',
  'Aerosol Optical Depth',
  'Snow Depth',
  'Days Since Last Snowfall',
  'Albedo',
  'Liquid Precipitation Depth',
  'Liquid Precipitation Quantity',
] as const
type Field = (typeof ORDER)[number]

/** What the dictionary has a field say where nothing was measured. */
const MISSING: Partial<Record<Field, string>> = {
  'Dry Bulb Temperature': '99.9',
  'Dew Point Temperature': '99.9',
  'Relative Humidity': '999',
  'Atmospheric Station Pressure': '999999',
  'Extraterrestrial Horizontal Radiation': '9999',
  'Extraterrestrial Direct Normal Radiation': '9999',
  'Horizontal Infrared Radiation Intensity': '9999',
  'Global Horizontal Radiation': '9999',
  'Direct Normal Radiation': '9999',
  'Diffuse Horizontal Radiation': '9999',
  'Global Horizontal Illuminance': '999999',
  'Direct Normal Illuminance': '999999',
  'Diffuse Horizontal Illuminance': '999999',
  'Zenith Luminance': '9999',
  'Wind Direction': '999',
  'Wind Speed': '999',
  'Total Sky Cover': '99',
  'Opaque Sky Cover': '99',
  Visibility: '9999',
  'Ceiling Height': '99999',
  'Present Weather Observation': '9',
  'Present Weather Codes': '999999999',
  'Precipitable Water': '999',
  'Aerosol Optical Depth': '.999',
  'Snow Depth': '999',
  'Days Since Last Snowfall': '99',
  Albedo: '999',
  'Liquid Precipitation Depth': '999',
  'Liquid Precipitation Quantity': '99',
}

const HEADER = `LOCATION,Saltpan,Plateau,XXX,invented,000000,-31.00,21.00,2.0,1180.0
DESIGN CONDITIONS,0
TYPICAL/EXTREME PERIODS,0
GROUND TEMPERATURES,0
HOLIDAYS/DAYLIGHT SAVINGS,No,0,0,0
COMMENTS 1,"an invented day, written to the dictionary
COMMENTS 2,no. 2
DATA PERIODS,1,1,Data,Sunday, 1/ 1,12/31`.split('\n')

/** Invented weather of an hour: every value says which hour and field it is of. */
function line(year: number, month: number, day: number, hour: number, said: Partial<Record<Field, string>> = {}) {
  const isDay = hour >= 7 && hour <= 18
  const values: Partial<Record<Field, string>> = {
    ...MISSING,
    Year: `${year}`,
    Month: `${month}`,
    Day: `${day}`,
    Hour: `${hour}`,
    Minute: '60',
    'Data Source and Uncertainty Flags': 'A7A7',
    'Dry Bulb Temperature': `${10 + hour / 2}`,
    'Dew Point Temperature': '4.5',
    'Relative Humidity': `${30 + hour}`,
    'Atmospheric Station Pressure': `${88_000 + hour}`,
    'Global Horizontal Radiation': `${isDay ? 100 + hour : 0}`,
    'Direct Normal Radiation': `${isDay ? 200 + hour : 0}`,
    'Diffuse Horizontal Radiation': `${isDay ? 50 + hour : 0}`,
    'Wind Direction': `${hour * 15}`,
    'Wind Speed': `${hour / 4}`,
    'Total Sky Cover': `${hour % 11}`,
    ...said,
  }
  return ORDER.map((field) => values[field] ?? '0').join(',')
}

type Wish = (month: number, day: number, hour: number) => Partial<Record<Field, string>>

/** A file with the hours of three days of October 1997 and of 28 February 2003. */
function file(said: Wish = () => ({})): string {
  const days = [
    [1997, 10, 16],
    [1997, 10, 17],
    [1997, 10, 18],
    [2003, 2, 28],
  ]
  const rows = days.flatMap(([year, month, day]) =>
    Array.from({ length: 24 }, (_, i) => line(year, month, day, i + 1, said(month, day, i + 1))),
  )
  return [...HEADER, ...rows, ''].join('\n')
}

const WISH = { from: '2026-10-16', to: '2026-10-18' }

function skyOf(text: string, options: Parameters<typeof readEpwSky>[1] = WISH) {
  const reading = readEpwSky(text, options)
  if (reading.problems !== undefined) throw new Error(JSON.stringify(reading.problems))
  return reading
}

const problemsOf = (text: string, options = WISH) => readEpwSky(text, options).problems ?? []
const at = (hour: number, field: Field, value: string): Wish => {
  return (_month, day, own) => (day === 17 && own === hour ? { [field]: value } : {})
}

describe('days of an EPW file in the year of the race', () => {
  const { document, notices, summary } = skyOf(file())
  const [place] = document.places

  it('closes hour 1 to 24 with its stamp, in standard time', () => {
    expect(place.at).toHaveLength(72)
    expect([place.at[0], place.at[23], place.at[71]]).toEqual([
      '2026-10-16T01:00:00+02:00',
      '2026-10-17T00:00:00+02:00',
      '2026-10-19T00:00:00+02:00',
    ])
    expect(document.utcOffset).toBe('+02:00')
  })
  it('takes its place from LOCATION', () => {
    expect(place).toMatchObject({ name: 'Saltpan', latDeg: -31, lonDeg: 21, elevationM: 1180 })
    expect(document.name).toBe('Saltpan, typical year')
    expect(summary.places).toEqual([{ name: 'Saltpan', rows: 72 }])
  })
  it('puts every field of the dictionary into its column and unit', () => {
    // Hour 12 by the invented weather above; pressure in Pa is hPa × 100, sky cover in tenths is % / 10.
    const row = [place.airTempC, place.humidityPct, place.pressureHpa, place.ghiWm2, place.dniWm2, place.dhiWm2]
    expect(row.map((column) => column?.[11])).toEqual([16, 42, 880.12, 112, 212, 62])
    expect([place.windFromDeg, place.windMps, place.cloudPct].map((column) => column?.[11])).toEqual([180, 3, 10])
    expect(place.dewPointC).toBeUndefined()
  })
  it('is a typical year, whose light is the hour’s and whose rest is the stamp’s', () => {
    expect(document.source).toBe('typical')
    expect(document.averaging).toMatchObject({ ghiWm2: 'preceding', dniWm2: 'preceding', airTempC: 'instant' })
    expect(document.averaging.cloudPct).toBe('instant')
    expect(notices[0].detail).toBe('a typical year, not a forecast; its hours are of October 1997')
  })
  it('takes 28 February for a leap day that the file has not, and a leap day that it has', () => {
    const without = skyOf(file(), { from: '2028-02-29', to: '2028-02-29' })
    expect(without.document.places[0].at[0]).toBe('2028-02-29T01:00:00+02:00')
    const rows = Array.from({ length: 24 }, (_, i) => line(2004, 2, 29, i + 1, { 'Dry Bulb Temperature': '7.5' }))
    const own = skyOf(`${file()}${rows.join('\n')}`, { from: '2028-02-29', to: '2028-02-29' })
    expect(own.document.places[0].airTempC).toEqual(Array(24).fill(7.5))
  })
})

describe('codes for what was not measured', () => {
  it.each([
    ['Dry Bulb Temperature', '99.9', 'airTempC'],
    ['Relative Humidity', '999', 'humidityPct'],
    ['Atmospheric Station Pressure', '999999', 'pressureHpa'],
    ['Global Horizontal Radiation', '9999', 'ghiWm2'],
    ['Direct Normal Radiation', '9999', 'dniWm2'],
    ['Diffuse Horizontal Radiation', '9999', 'dhiWm2'],
    ['Wind Direction', '999', 'windFromDeg'],
    ['Wind Speed', '999', 'windMps'],
    ['Total Sky Cover', '99', 'cloudPct'],
  ] as const)('are no values: %s %s', (field, code, column) => {
    const [place] = skyOf(file(at(12, field, code))).document.places
    expect(place[column]?.[24 + 11]).toBeNull()
    expect(place[column]?.[24 + 10]).not.toBeNull()
  })
  it('leave a column out where they fill it, humidity for the dew point', () => {
    const { document, notices } = skyOf(file(() => ({ 'Relative Humidity': '999', 'Total Sky Cover': '99' })))
    expect(document.places[0].dewPointC).toEqual(Array(72).fill(4.5))
    expect(document.places[0].cloudPct).toBeUndefined()
    expect(notices.map(({ detail }) => detail)).toContain('total sky cover: no value in these days; taken as not there')
  })
  it('take direction 0 for calm only where nothing moves, and 360 for north', () => {
    const [place] = skyOf(
      file((_month, day, hour) => {
        if (day !== 17 || hour > 3) return {}
        return { 'Wind Direction': hour === 3 ? '360' : '0', 'Wind Speed': hour === 1 ? '0' : '2' }
      }),
    ).document.places
    expect(place.windFromDeg?.slice(24, 27)).toEqual([null, 0, 360])
    expect(place.windMps?.slice(24, 27)).toEqual([0, 2, 2])
  })
  it('take no wind where all is calm', () => {
    const calm = skyOf(file(() => ({ 'Wind Direction': '0', 'Wind Speed': '0' })))
    expect(calm.document.places[0].windMps).toBeUndefined()
    expect(calm.notices.map(({ detail }) => detail)).toContain('calm throughout: no wind is taken')
  })
  it('take humidity to 110 % as full and say so', () => {
    const { document, notices } = skyOf(file(at(12, 'Relative Humidity', '104')))
    expect(document.places[0].humidityPct?.[35]).toBe(100)
    expect(notices.map(({ detail }) => detail)).toContain(
      'relative humidity: 1 values just out of range, taken as its end',
    )
  })
})

describe('what is wrong with an EPW file', () => {
  it('is nothing where a byte order mark and other line ends come with it', () => {
    expect(skyOf(`\uFEFF${file().replaceAll('\n', '\r\n')}`).document).toEqual(skyOf(file()).document)
  })
  it('is a value that no weather has, with line and column', () => {
    const [problem] = problemsOf(file(at(12, 'Atmospheric Station Pressure', '880')))
    // 8 lines of header, 24 hours of the 16th, hour 12 of the 17th; nine cells stand before it.
    expect(problem).toMatchObject({ field: 'atmospheric station pressure', value: '"880"', line: 8 + 24 + 12 })
    expect(problem.detail).toBe('expected a number from 40000 to 110000 Pa, or its code for a missing value')
    const before = line(1997, 10, 17, 12).split(',').slice(0, 9).join(',')
    expect(problem.column).toBe(before.length + 2)
  })
  it('is a cell that is no number', () => {
    expect(problemsOf(file(at(12, 'Wind Speed', 'four')))[0]).toMatchObject({ field: 'wind speed', value: '"four"' })
    expect(problemsOf(file(at(12, 'Hour', '25')))[0]).toMatchObject({ field: 'hour', line: 44, value: '"25"' })
    expect(problemsOf(file(at(12, 'Month', '13')))[0].detail).toBe('expected a whole number from 1 to 12')
  })
  it('is days that it does not hold', () => {
    const problems = problemsOf(file(), { from: '2026-10-18', to: '2026-10-19' })
    expect(problems).toHaveLength(24)
    expect(problems[0]).toMatchObject({ field: 'hour', value: '2026-10-19 hour 1' })
  })
  it('is a header that lacks a line, or says more than one record an hour', () => {
    const short = file().replace('GROUND TEMPERATURES,0\n', '')
    expect(problemsOf(short)[0]).toMatchObject({ line: 4, field: 'header' })
    expect(problemsOf(short)[0].detail).toContain('GROUND TEMPERATURES')
    expect(problemsOf(file().replace('DATA PERIODS,1,1', 'DATA PERIODS,1,4'))[0]).toMatchObject({
      field: 'DATA PERIODS',
      value: '"4"',
      line: 8,
      column: 16,
    })
  })
  it('is a place without numbers', () => {
    const nowhere = file().replace('-31.00,21.00,2.0,1180.0', '-31.00,221.00,xx,1180.0')
    expect(problemsOf(nowhere).map(({ field, column }) => [field, column])).toEqual([
      ['time zone', 60],
      ['lonDeg', 53],
    ])
  })
  it('is rows cut short, or none', () => {
    expect(problemsOf([...HEADER, '1997,10,16,1,60'].join('\n'))[0]).toMatchObject({ line: 9, value: '5 cells' })
    expect(problemsOf(HEADER.join('\n'))[0].detail).toBe('expected hours under the header')
  })
  it('is said in words where it is another kind of file', () => {
    expect(problemsOf('time;GHI (W/m2)\n2026-10-17T06:00Z;1\n')[0].detail).toBe(
      'expected an EPW weather file, whose first line starts with LOCATION; this is a weather table with a first line of headers: read it with fileKind "table"',
    )
  })
})
