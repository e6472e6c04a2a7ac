import { describe, expect, it } from 'vitest'
import { skyModel } from '../../server/documents/sky-model.ts'
import { weatherAlong } from '../../server/engine/sky.ts'
import { sunPath, trueSun } from '../../server/engine/sun.ts'
import { readCsvSky } from '../../server/files/csv-sky.ts'
import { readTmy3Sky } from '../../server/files/tmy3-sky.ts'
import { referenceText } from '../support/reference.ts'

const TEXT = referenceText('723170TYA.CSV')
const WEEK = { from: '2026-10-12', to: '2026-10-18' }
const H = 3_600_000
const DEG = Math.PI / 180

function skyOf(text: string, options: Parameters<typeof readTmy3Sky>[1]) {
  const reading = readTmy3Sky(text, options)
  if (reading.problems !== undefined) throw new Error(JSON.stringify(reading.problems))
  return reading
}

/** The whole year, span by span. */
const SPANS = [
  ['2026-01-01', '2026-02-28'],
  ['2026-03-01', '2026-04-29'],
  ['2026-04-30', '2026-06-28'],
  ['2026-06-29', '2026-08-27'],
  ['2026-08-28', '2026-10-26'],
  ['2026-10-27', '2026-12-25'],
  ['2026-12-26', '2026-12-31'],
].map(([from, to]) => skyOf(TEXT, { from, to }).document.places[0])

type Column = 'ghiWm2' | 'dniWm2' | 'dhiWm2' | 'airTempC' | 'windMps' | 'pressureHpa' | 'humidityPct' | 'cloudPct'
const yearOf = (column: Column): number[] => SPANS.flatMap((place) => place[column] ?? []).map((value) => value ?? NaN)
const sum = (values: number[]): number => values.reduce((a, b) => a + b, 0)

/** How far GHI is from DNI cos z + DHI with the sun of the middle of the hour, stamps read so many hours late. */
function rms(lateH: number): { rows: number; wm2: number } {
  const misses = SPANS.flatMap(({ at, ghiWm2, dniWm2, dhiWm2 }) =>
    at.flatMap((stamp, i) => {
      const { altitudeRad } = trueSun(Date.parse(stamp) + (lateH - 0.5) * H, 36.1 * DEG, -79.95 * DEG)
      if (altitudeRad < 5 * DEG) return []
      return [(dniWm2?.[i] ?? NaN) * Math.sin(altitudeRad) + (dhiWm2?.[i] ?? NaN) - (ghiWm2?.[i] ?? NaN)]
    }),
  )
  return { rows: misses.length, wm2: Math.sqrt(sum(misses.map((miss) => miss * miss)) / misses.length) }
}

describe('a whole typical year, read span by span', () => {
  // Every figure: awk -F, 'NR>2{g+=$5;d+=$8;h+=$11;t+=$32;p+=$41;r+=$38;w+=$47;c+=$26;
  //   if($5>G)G=$5;if($8>D)D=$8;if($11>H)H=$11;if($47>W)W=$47;if($32>T)T=$32;if(n==0||$32<L)L=$32;n++}
  //   END{printf "%d %d %d %d | %d %d %d | %.1f %.1f %.1f | %.6f %.6f %.6f %.6f %.6f\n",
  //   n,g,d,h,G,D,H,W,T,L,t/n,p/n,r/n,w/n,c/n}' test/reference/723170TYA.CSV
  // prints: 8760 1566203 1476549 682223 | 1013 984 511 | 15.4 35.6 -16.7 | 14.421849 986.917237 69.516096 3.054441 5.567694
  it.each([
    ['ghiWm2', 1_566_203, 1013],
    ['dniWm2', 1_476_549, 984],
    ['dhiWm2', 682_223, 511],
  ] as const)('holds the sum and the peak of %s', (column, total, peak) => {
    expect(yearOf(column)).toHaveLength(8760)
    expect(sum(yearOf(column))).toBe(total)
    expect(Math.max(...yearOf(column))).toBe(peak)
  })
  it.each([
    ['airTempC', 14.421849],
    ['pressureHpa', 986.917237],
    ['humidityPct', 69.516096],
    ['windMps', 3.054441],
    ['cloudPct', 55.67694],
  ] as const)('holds the mean of %s', (column, mean) => {
    expect(sum(yearOf(column)) / 8760).toBeCloseTo(mean, column === 'cloudPct' ? 5 : 6)
  })
  it('holds the extremes of temperature and wind', () => {
    expect(Math.max(...yearOf('airTempC'))).toBe(35.6)
    expect(Math.min(...yearOf('airTempC'))).toBe(-16.7)
    expect(Math.max(...yearOf('windMps'))).toBe(15.4)
  })
  it('closes GHI = DNI cos z + DHI with the sun of the middle of the hour', () => {
    expect(rms(0).rows).toBe(4070)
    expect(rms(0).wm2).toBeLessThan(1.28)
    expect(rms(1).wm2).toBeGreaterThan(50)
  })
})

describe('days of a typical year in the year of the race', () => {
  const { document, notices, summary } = skyOf(TEXT, WEEK)
  const [place] = document.places

  it('says that it is no forecast and where its hours are from', () => {
    expect(document.source).toBe('typical')
    expect(document.name).toBe('GREENSBORO PIEDMONT TRIAD INT, typical year')
    expect(notices.map(({ detail }) => detail)).toEqual([
      'a typical year, not a forecast; its hours are of October 1980',
    ])
  })
  it('takes place and offset from the header', () => {
    expect(place).toMatchObject({ latDeg: 36.1, lonDeg: -79.95, elevationM: 273 })
    expect(document.utcOffset).toBe('-05:00')
    expect(document.issuedAt).toBe('2026-10-12T00:00:00-05:00')
  })
  it('rolls 24:00 over to the next day', () => {
    expect(place.at[0]).toBe('2026-10-12T01:00:00-05:00')
    expect(place.at[23]).toBe('2026-10-13T00:00:00-05:00')
    expect(summary).toMatchObject({ from: place.at[0], to: '2026-10-19T00:00:00-05:00', stepMinutes: 60 })
  })
  it('holds the rows of the file', () => {
    // awk -F, '/^10\/16\//&&($2=="24:00"||$2=="13:00"){print $2,$5,$8,$11,$32,$38,$41,$44,$47,$26}'
    // 13:00 600 600 178 22.2 55 993 250 2.6 4 and 24:00 0 0 0 12.8 96 992 220 1.5 0
    const rowAt = (stamp: string) => {
      const i = place.at.indexOf(stamp)
      const { ghiWm2, dniWm2, dhiWm2, airTempC, humidityPct, pressureHpa, windFromDeg, windMps, cloudPct } = place
      const columns = [ghiWm2, dniWm2, dhiWm2, airTempC, humidityPct, pressureHpa, windFromDeg, windMps, cloudPct]
      return columns.map((column) => column?.[i])
    }
    expect(rowAt('2026-10-16T13:00:00-05:00')).toEqual([600, 600, 178, 22.2, 55, 993, 250, 2.6, 40])
    expect(rowAt('2026-10-17T00:00:00-05:00')).toEqual([0, 0, 0, 12.8, 96, 992, 220, 1.5, 0])
  })
  it('speaks for the hour before the stamp with its light, for the stamp with the rest', () => {
    expect(document.averaging).toMatchObject({ ghiWm2: 'preceding', dniWm2: 'preceding', dhiWm2: 'preceding' })
    expect(document.averaging).toMatchObject({ cloudPct: 'instant', airTempC: 'instant', windMps: 'instant' })
    expect(document.pressureIs).toBe('station')
  })
  it('has no direction in calm air, and north at 360', () => {
    // awk -F, '$44==0&&$47==0{n++} $44==360{k++} END{print n,k}': 1050 210
    const directions = SPANS.flatMap((one) => one.windFromDeg ?? [])
    expect(directions.filter((from) => from === null)).toHaveLength(1050)
    expect(directions.filter((from) => from === 360)).toHaveLength(210)
  })
  it('gives every hour of light back once it is a sky', () => {
    const { sky } = skyModel(document)
    const MINUTES = 60
    const count = place.at.length * MINUTES
    const first = Date.parse(place.at[0]) - H
    const atMs = Float64Array.from({ length: count }, (_, i) => first + (i + 0.5) * (H / MINUTES))
    const all = (value: number) => new Float64Array(count).fill(value)
    const along = { count, atMs, latRad: all(36.1 * DEG), lonRad: all(-79.95 * DEG), altM: all(273) }
    const weather = weatherAlong(sky, sunPath(atMs[0], atMs[count - 1]), along)
    const lit = place.at.flatMap((_, i) => {
      const mean = sum([...weather.ghiWm2.subarray(i * MINUTES, (i + 1) * MINUTES)]) / MINUTES
      const given = place.ghiWm2?.[i] ?? NaN
      return given > 50 ? [Math.abs(mean / given - 1)] : []
    })
    expect(lit.length).toBeGreaterThan(60)
    expect(Math.max(...lit)).toBeLessThan(1e-5)
  })
})

describe('the seams of the calendar', () => {
  it('goes over the turn of the year', () => {
    const { document, notices } = skyOf(TEXT, { from: '2026-12-31', to: '2027-01-01', name: 'Turn of the year' })
    const [{ at, airTempC }] = document.places
    expect([at[0], at[24], at[47]]).toEqual([
      '2026-12-31T01:00:00-05:00',
      '2027-01-01T01:00:00-05:00',
      '2027-01-02T00:00:00-05:00',
    ])
    // The first row of the file: 01/01/1988, 01:00, 10.0 °C.
    expect(airTempC?.[24]).toBe(10)
    expect(notices[0].detail).toContain('December 1980, January 1988')
  })
  it('takes 28 February for a leap day that the file has not', () => {
    const { document, notices } = skyOf(TEXT, { from: '2028-02-28', to: '2028-03-01' })
    const [{ at, ghiWm2 }] = document.places
    expect(at[24]).toBe('2028-02-29T01:00:00-05:00')
    expect(at[48]).toBe('2028-03-01T01:00:00-05:00')
    expect(ghiWm2?.slice(24, 48)).toEqual(ghiWm2?.slice(0, 24))
    expect(notices.map(({ detail }) => detail).join()).toContain('29 February takes the hours of 28 February')
  })
})

describe('what is wrong with a TMY3 file', () => {
  const lines = TEXT.split('\n')
  const dayLines = lines.filter((line, i) => i < 2 || line.startsWith('10/16/'))
  const ONE = { from: '2026-10-16', to: '2026-10-16' }
  const problemsOf = (changed: string[], options: Parameters<typeof readTmy3Sky>[1] = ONE) =>
    readTmy3Sky(changed.join('\n'), options).problems ?? []

  it('is nothing where a byte order mark and other line ends come with it', () => {
    expect(skyOf(`\uFEFF${dayLines.join('\r\n')}`, ONE).document).toEqual(skyOf(TEXT, ONE).document)
  })
  it('is an hour that is not there', () => {
    const [problem] = problemsOf(dayLines.filter((line) => !line.startsWith('10/16/1980,09:00')))
    expect(problem).toMatchObject({ field: 'hour', value: '2026-10-16 hour 9', detail: 'expected a row for it' })
    expect(problemsOf(dayLines, { from: '2026-10-16', to: '2026-10-17' })).toHaveLength(24)
  })
  it('is an hour twice, a wrong date, a wrong time', () => {
    expect(problemsOf([...dayLines, dayLines[5]])[0]).toMatchObject({
      line: 27,
      detail: 'expected every hour of the year once; line 6 has it too',
    })
    const changed = (from: string, to: string) => dayLines.map((line) => line.replace(from, to))
    expect(problemsOf(changed('10/16/1980,09:00', '1980-10-16,09:00'))[0]).toMatchObject({ line: 11, column: 1 })
    expect(problemsOf(changed('10/16/1980,09:00', '10/16/1980,09:30'))[0]).toMatchObject({ line: 11, column: 12 })
    expect(problemsOf(changed('10/16/1980,09:00', '10/16/1980,25:00'))[0].field).toBe('time')
  })
  it('is a value out of range, with line and column', () => {
    const cells = dayLines[14].split(',')
    cells[31] = '222'
    const [problem] = problemsOf(dayLines.with(14, cells.join(',')))
    expect(problem).toMatchObject({ field: 'Dry-bulb (C)', value: '"222"', line: 15 })
    expect(problem.column).toBe(cells.slice(0, 31).join(',').length + 2)
  })
  it('takes -9900 for a missing value', () => {
    const cells = dayLines[14].split(',')
    cells[4] = '-9900'
    const { document } = skyOf(dayLines.with(14, cells.join(',')).join('\n'), ONE)
    expect(document.places[0].ghiWm2?.[12]).toBeNull()
  })
  it('is a column that is not there, a short row, no rows', () => {
    expect(problemsOf(dayLines.with(1, dayLines[1].replace('Wspd (m/s)', 'Wind')))[0].field).toBe('Wspd (m/s)')
    expect(problemsOf(dayLines.with(9, '10/16/1980,08:00,0'))[0]).toMatchObject({ line: 10, value: '3 cells' })
    expect(problemsOf(dayLines.slice(0, 2))[0].detail).toBe('expected hours under the header')
  })
  it('is a place that no place is', () => {
    const changed = dayLines.with(0, '1,"X",NC,-25.0,96.1,-79.950,273')
    expect(problemsOf(changed).map(({ field }) => field)).toEqual(['time zone', 'latDeg'])
  })
  it('is a span that ends before it starts, or is too long', () => {
    expect(problemsOf(dayLines, { from: '2026-10-16', to: '2026-10-15' })[0]).toMatchObject({ field: 'to' })
    expect(problemsOf(dayLines, { from: '2026-10-16', to: '2026-12-15' })[0].detail).toContain('at most 60 days')
  })
  it('is said in words where it is another kind of file', () => {
    expect(problemsOf(['time,GHI (W/m2)', '2026-10-17T06:00Z,1'])[0].detail).toContain('this is a weather table')
    expect(problemsOf(['LOCATION,X'])[0].detail).toContain('this is an EPW weather file')
    expect(problemsOf(['<gpx version="1.1"></gpx>'])[0].detail).toContain('this is a GPX track')
    expect(problemsOf([''])[0].detail).toContain('none of the known kinds')
    const table = readCsvSky(TEXT, { name: 'T', source: 'forecast', issuedAt: '2026-10-16T18:00:00Z' })
    expect(table.problems?.[0].detail).toContain('read it with fileKind "tmy3"')
  })
})
