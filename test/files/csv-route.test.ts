import { describe, expect, it } from 'vitest'
import { readCsvRoute } from '../../server/files/csv-route.ts'
import type { RouteTableOptions } from '../../server/files/route-table.ts'

function routeOf(text: string, options?: RouteTableOptions) {
  const reading = readCsvRoute(text, options)
  if (reading.problems !== undefined) throw new Error(JSON.stringify(reading.problems))
  return reading
}

function problemsOf(text: string, options?: RouteTableOptions) {
  const { problems } = readCsvRoute(text, options)
  if (problems === undefined) throw new Error('expected problems, got a route')
  return problems
}

const PLAIN = 'lat,lon,ele\n-31.00,21.00,1200\n-31.01,21.00,1210\n-31.02,21.00,1215\n'

describe('a table of road points', () => {
  it('is read with the plainest headers, heights taken as metres and saying so', () => {
    const { document, notices, summary } = routeOf(PLAIN, { name: 'Saltpan' })
    expect(document.name).toBe('Saltpan')
    expect(document.points.latDeg).toEqual([-31, -31.01, -31.02])
    expect(document.stretches).toEqual([])
    expect(summary.climbBeforeM).toBe(15)
    // 0.02° of latitude at 31° S: M = 6352.3 km (from memory, as tabulated for WGS 84), so 2.2174 km.
    expect(summary.lengthKm).toBeCloseTo(2.2174, 3)
    expect(notices).toContainEqual({ detail: 'ele: no unit stated, taken as m', line: 1 })
  })

  const SAME: { what: string; text: string; options?: RouteTableOptions }[] = [
    {
      what: 'semicolons and decimal commas',
      text: 'Latitude;Longitude;Elevation (m)\n-31,00;21,00;1200,0\n-31,01;21,00;1210,0\n-31,02;21,00;1215,0',
    },
    {
      what: 'tabs, CRLF and a byte order mark',
      text: '\uFEFFlatitude [deg]\tlng [deg]\televation [m]\r\n-31\t21\t1200\r\n-31.01\t21\t1210\r\n-31.02\t21\t1215\r\n',
    },
    {
      what: 'bars, blank lines, comments and spaces',
      text: '# a comment\n\nlat | lon | alt_m\n-31 | 21 | 1200\n\n# another\n-31.01 | 21 | 1210\n-31.02 | 21 | 1215',
    },
    {
      what: 'commas with quoted decimal commas',
      text: 'lat,lon,ele [m]\n"-31,00","21,00","1200,0"\n"-31,01","21,00","1210,0"\n"-31,02","21,00","1215,0"',
    },
    { what: 'feet', text: 'lat,lon,elev (ft)\n-31,21,3937.007874\n-31.01,21,3969.816273\n-31.02,21,3986.220472' },
    { what: 'the document’s own names', text: 'latDeg,lonDeg,elevationM\n-31,21,1200\n-31.01,21,1210\n-31.02,21,1215' },
    { what: 'line ends of old', text: 'lat,lon,ele_m\r-31,21,1200\r-31.01,21,1210\r-31.02,21,1215\r' },
    { what: 'a delimiter behind each line', text: 'lat,lon,ele_m\n-31,21,1200,\n-31.01,21,1210,\n-31.02,21,1215,\n' },
    {
      what: 'columns mapped by hand',
      text: 'north,east,up\n-31,21,1.2\n-31.01,21,1.21\n-31.02,21,1.215',
      options: { columns: { latDeg: 'North', lonDeg: 'east', elevationM: 'up' }, units: { elevationM: 'km' } },
    },
  ]
  it.each(SAME)('gives the same road with $what', ({ text, options }) => {
    const { document } = routeOf(text, options)
    const plain = routeOf(PLAIN).document
    expect(document.points.latDeg).toEqual(plain.points.latDeg)
    expect(document.points.lonDeg).toEqual(plain.points.lonDeg)
    document.points.elevationM?.forEach((m, i) => expect(m).toBeCloseTo(plain.points.elevationM?.[i] ?? Number.NaN, 2))
  })

  it('turns limits, surface and halts into stretches that meet where the values change', () => {
    const text =
      'lat,lon,speed limit (mph),surface,halts per km\n0,0,60,1,\n0.01,0,60,1,\n0.02,0,30,1.2,0.5\n0.02,0,40,1.2,0.5\n0.03,0,,,\n0.04,0,50,1,0'
    const { document, notices } = routeOf(text)
    const [first, second, ...more] = document.stretches
    expect(more).toEqual([])
    // 60 mph is 96.56064 km/h: the mile is 1.609344 km. @source international yard and pound agreement, 1959
    expect(first).toMatchObject({ fromKm: 0, limitKmh: 96.56064, surfaceFactor: 1 })
    expect(first).not.toHaveProperty('haltsPerKm')
    expect(second).toMatchObject({ fromKm: first.toKm, limitKmh: 64.37376, surfaceFactor: 1.2, haltsPerKm: 0.5 })
    expect(second.toKm - second.fromKm).toBeCloseTo(1.1057, 3)
    expect(notices.map((n) => n.detail)).toContain('speed limit (mph): empty in 1 rows; nothing is stated there')
  })

  it('lists the columns that it does not read', () => {
    const { notices } = routeOf('lat,lon,heart rate,ele_m\n0,0,90,1\n0.01,0,91,1\n')
    expect(notices[0].detail).toBe('columns not read: heart rate')
  })
})

describe('a table of road points that is wrong', () => {
  const CASES: {
    what: string
    text: string
    options?: RouteTableOptions
    field: string
    says: string
    line: number
    column?: number
  }[] = [
    { what: 'empty', text: '', field: 'table', says: 'names of at least 2 columns', line: 1, column: 1 },
    { what: 'only a header', text: 'lat,lon\n', field: 'table', says: 'rows under the header', line: 1 },
    { what: 'no header', text: '1,2\n3,4\n', field: 'latDeg', says: '"1" or "2"', line: 1 },
    { what: 'no longitude', text: 'lat,ele_m\n1,2\n3,4\n', field: 'lonDeg', says: 'expected a column', line: 1 },
    {
      what: 'latitude over the pole',
      text: 'lat,lon\n1,2\n 91,2\n',
      field: 'lat',
      says: '-90 to 90 °',
      line: 3,
      column: 2,
    },
    {
      what: 'a word for a number',
      text: 'lat,lon\n1,2\n1.1,east\n',
      field: 'lon',
      says: 'a number with a decimal point',
      line: 3,
      column: 5,
    },
    { what: 'an empty latitude', text: 'lat,lon\n1,2\n,2\n', field: 'lat', says: 'in every row', line: 3, column: 1 },
    { what: 'a short row', text: 'lat,lon,ele_m\n1,2,3\n1,2\n', field: 'table', says: 'expected 3 cells', line: 3 },
    { what: 'a long row', text: 'lat,lon\n1,2\n1,1,3\n', field: 'table', says: 'expected 2 cells', line: 3, column: 5 },
    {
      what: 'a quote that never closes',
      text: 'lat,lon\n1,2\n1,"2\n3,4\n',
      field: 'table',
      says: 'closing quote',
      line: 3,
      column: 3,
    },
    {
      what: 'text behind a quote',
      text: 'lat,lon\n1,2\n"1"x,2\n',
      field: 'table',
      says: 'after the closing quote',
      line: 3,
      column: 4,
    },
    {
      what: 'a limit without unit',
      text: 'lat,lon,speed limit\n1,2,60\n1.1,2,60\n',
      field: 'limitKmh',
      says: 'no unit stated',
      line: 1,
      column: 9,
    },
    {
      what: 'an unknown unit',
      text: 'lat,lon,elev (fathoms)\n1,2,3\n1.1,2,3\n',
      field: 'elevationM',
      says: 'unit "fathoms" unknown: expected m, ft or km',
      line: 1,
      column: 9,
    },
    {
      what: 'two latitudes',
      text: 'lat,lon,latitude\n1,2,1\n1.1,2,1\n',
      field: 'latDeg',
      says: '"lat" means the same',
      line: 1,
      column: 9,
    },
    {
      what: 'both decimal signs',
      text: 'lat;lon\n1.5;2.5\n1,6;2.5\n',
      field: 'decimal',
      says: 'both signs appear',
      line: 3,
      column: 1,
    },
    {
      what: 'a thousands comma',
      text: 'lat;lon;ele_m\n1.5;2.5;1,200.5\n1.6;2.5;3\n',
      field: 'ele_m',
      says: 'expected a number',
      line: 2,
      column: 9,
    },
    {
      what: 'a limit of 300 mph',
      text: 'lat,lon,limit [mph]\n1,2,60\n1.1,2,300\n',
      field: 'limit [mph]',
      says: 'found 482.803 once converted from mph',
      line: 3,
    },
    {
      what: 'a jump',
      text: `lat,lon\n${Array.from({ length: 9 }, (_, i) => `0,${i / 1000}`).join('\n')}\n3,0\n3,0.001`,
      field: 'points',
      says: 'jump',
      line: 11,
    },
    {
      what: 'a mapped header that is not there',
      text: PLAIN,
      options: { columns: { elevationM: 'height' } },
      field: 'columns.elevationM',
      says: '"lat", "lon" or "ele"',
      line: 1,
    },
    {
      what: 'a unit wish that is none',
      text: PLAIN,
      options: { units: { elevationM: 'stone' } },
      field: 'elevationM',
      says: 'expected as its unit m, ft or km',
      line: 1,
    },
  ]
  it.each(CASES)('is refused by field and line: $what', ({ text, options, field, says, line, column }) => {
    const [problem] = problemsOf(text, options)
    expect(problem).toMatchObject({ field, line, ...(column !== undefined && { column }) })
    expect(problem.detail).toContain(says)
  })

  it('is refused for options that are not known, by their names', () => {
    const [problem] = problemsOf(PLAIN, { name: 'x', colour: 'red' } as RouteTableOptions)
    expect(problem).toMatchObject({ field: 'colour', detail: 'unknown field; expected none of this name' })
  })
  it('is refused for more than 100,000 points at the first one too many', () => {
    const rows = Array.from({ length: 100_005 }, (_, i) => `${(i * 0.0001).toFixed(4)},7`)
    expect(problemsOf(`lat,lon\n${rows.join('\n')}`)).toEqual([
      { field: 'points', value: 'point 100001', detail: 'expected at most 100000 points', line: 100_002, column: 1 },
    ])
  })
})
