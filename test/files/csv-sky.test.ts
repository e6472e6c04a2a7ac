import { describe, expect, it } from 'vitest'
import { readCsvSky } from '../../server/files/csv-sky.ts'
import type { SkyTableOptions } from '../../server/files/sky-table.ts'
import { referenceText } from '../support/reference.ts'

const PLACE = { name: 'Saltpan', latDeg: -31, lonDeg: 21, elevationM: 1180 }
const BASE: SkyTableOptions = { name: 'Evening run', source: 'forecast', issuedAt: '2026-10-16T18:00:00Z' }
const ONE: SkyTableOptions = { ...BASE, place: PLACE, utcOffset: '+02:00' }

function skyOf(text: string, options: SkyTableOptions = ONE) {
  const reading = readCsvSky(text, options)
  if (reading.problems !== undefined) throw new Error(JSON.stringify(reading.problems))
  return reading
}

function problemsOf(text: string, options: SkyTableOptions = ONE) {
  const { problems } = readCsvSky(text, options)
  if (problems === undefined) throw new Error('expected problems, got a sky')
  return problems
}

/** One column beside time, temperature and cloud, its values at hourly stamps; wind has its direction. */
const column = (header: string, ...values: (string | number)[]) => {
  const isWind = /^(?:wind|ff)/i.test(header) && !/from|dir|P\d0/i.test(header)
  const head = `time;temp (°C);cloud (%, instant);${isWind ? 'wind from (deg);' : ''}${header}`
  const row = (v: string | number, i: number) => `2026-10-17T0${i + 6}:00;20;10;${isWind ? '180;' : ''}${v}`
  return `${head}\n${values.map(row).join('\n')}\n`
}

describe('a weather table with all there is', () => {
  const { document, summary, notices } = skyOf(
    `time,cloud cover (%),"GHI (W/m2, preceding hour)","DNI [W/m², preceding hour]",DHI preceding hour mean W/m2,temperature_2m (°C),relative humidity (%),wind_speed_10m (km/h),wind_gusts_10m (km/h),wind_direction_10m (°),surface pressure (hPa),Linke turbidity,wind_speed_100m (km/h)
2026-10-17T06:00+02:00,0,-2,0,0,12.5,100.4,18,36,360,884.1,2.5,40
2026-10-17T07:00+02:00,25,110,420,NA,14,81,NA,,NNW,884.0,2.5,41
2026-10-17T08:00+02:00,-9999,320,700,60,17,60,7.2,9,calm,883.9,2.5,42
`,
    { ...BASE, place: PLACE, averaging: { perColumn: { cloudPct: 'instant' } } },
  )
  const [place] = document.places

  it('keeps each stamp with its own offset', () => {
    expect(place.at).toEqual(['2026-10-17T06:00:00+02:00', '2026-10-17T07:00:00+02:00', '2026-10-17T08:00:00+02:00'])
    expect(document.utcOffset).toBe('+02:00')
    expect(summary).toMatchObject({ from: place.at[0], to: place.at[2], stepMinutes: 60 })
    expect(summary.places).toEqual([{ name: 'Saltpan', rows: 3 }])
  })
  it('brings every column to the document’s unit and every gap to null', () => {
    expect(place.cloudPct).toEqual([0, 25, null])
    expect(place.ghiWm2).toEqual([0, 110, 320])
    expect(place.dhiWm2).toEqual([0, null, 60])
    expect(place.airTempC).toEqual([12.5, 14, 17])
    expect(place.humidityPct).toEqual([100, 81, 60])
    expect(place.windMps).toEqual([5, null, 2])
    expect(place.gustMps).toEqual([10, null, 2.5])
    expect(place.windFromDeg).toEqual([360, 337.5, null])
    expect(place.pressureHpa).toEqual([884.1, 884, 883.9])
    expect(document.pressureIs).toBe('station')
  })
  it('says what each column’s stamps speak for', () => {
    expect(document.averaging).toMatchObject({ ghiWm2: 'preceding', dniWm2: 'preceding', dhiWm2: 'preceding' })
    expect(document.averaging).toMatchObject({ cloudPct: 'instant', airTempC: 'instant', windMps: 'instant' })
  })
  it('shows the columns with unit and convention, and those it did not read', () => {
    expect(summary.columns).toContainEqual({
      field: 'gustMps',
      header: 'wind_gusts_10m (km/h)',
      unit: 'km/h',
      averaging: 'instant',
    })
    expect(summary.columns).toHaveLength(11)
    expect(summary.ignored).toEqual(['wind_speed_100m (km/h)'])
    const said = notices.map((notice) => notice.detail)
    expect(said).toContain('columns not read: wind_speed_100m (km/h)')
    expect(said).toContain('GHI (W/m2, preceding hour): 1 values just out of range, taken as its end')
  })
})

describe('units of a weather table', () => {
  // Exact by definition: 1 kn = 1852 m/h, 1 mph = 0.44704 m/s, °C = (°F − 32)·5/9. Pressure: NIST SP 811, appendix B.8.
  it.each([
    { header: 'wind (kn)', value: 10, field: 'windMps', gives: 5.14444444444 },
    { header: 'wind speed mph', value: 10, field: 'windMps', gives: 4.4704 },
    { header: 'windMps', value: 4.5, field: 'windMps', gives: 4.5 },
    { header: 'FF [m s-1]', value: 4.5, field: 'windMps', gives: 4.5 },
    { header: 'dew point (°F)', value: 50, field: 'dewPointC', gives: 10 },
    { header: 'dewpoint_K', value: 283.15, field: 'dewPointC', gives: 10 },
    { header: 'RH (0-1)', value: 0.55, field: 'humidityPct', gives: 55 },
    { header: 'station pressure (Pa)', value: 88_400, field: 'pressureHpa', gives: 884 },
    { header: 'surface pressure [kPa]', value: 88.4, field: 'pressureHpa', gives: 884 },
    { header: 'pressure (station, mmHg)', value: 663, field: 'pressureHpa', gives: 883.927 },
    { header: 'station pressure (inHg)', value: 26.1, field: 'pressureHpa', gives: 883.848 },
    { header: 'ghi (kJ/m2, preceding hour)', value: 1800, field: 'ghiWm2', gives: 500 },
    { header: 'ghi (J/m², following)', value: 1_800_000, field: 'ghiWm2', gives: 500 },
    { header: 'GHI (Wh/m2, preceding)', value: 500, field: 'ghiWm2', gives: 500 },
    { header: 'global radiation [J/cm², preceding hour]', value: 180, field: 'ghiWm2', gives: 500 },
    { header: 'shortwave radiation (MJ m-2; preceding hour)', value: 1.8, field: 'ghiWm2', gives: 500 },
    { header: 'GHI P10 (W/m2, preceding)', value: 321, field: 'ghiP10Wm2', gives: 321 },
    { header: 'ghiP90Wm2 (preceding)', value: 654, field: 'ghiP90Wm2', gives: 654 },
    { header: 'wind P90 (kn)', value: 20, field: 'windP90Mps', gives: 10.2888888889 },
    { header: 'Linke', value: 3, field: 'turbidity', gives: 3 },
  ])('$header: $value is $gives', ({ header, value, field, gives }) => {
    const place: Record<string, unknown> = { ...skyOf(column(header, value, value)).document.places[0] }
    expect(place[field]).toEqual([expect.closeTo(gives, 3), expect.closeTo(gives, 3)])
  })

  it.each([
    { header: 'cloud (oktas, instant)', value: 6, gives: 75 },
    { header: 'sky cover (tenths, instant)', value: 6, gives: 60 },
    { header: 'cloud cover [fraction, preceding]', value: 0.6, gives: 60 },
    { header: 'cloudPct following', value: 60, gives: 60 },
  ])('$header: $value is $gives %', ({ header, value, gives }) => {
    const text = `time,temp C,"${header}"\n2026-10-17 06:00,20,${value}\n2026-10-17 07:00,20,${value}`
    expect(skyOf(text).document.places[0].cloudPct).toEqual([gives, gives])
  })

  it('an energy per interval is spread over the table’s own step', () => {
    const text = 'time;temp C;ghi (kJ/m2, preceding)\n2026-10-17 06:00;20;450\n2026-10-17 06:15;20;90\n'
    expect(skyOf(text).document.places[0].ghiWm2).toEqual([500, 100])
  })
  it('may be said beside the table', () => {
    const text = 'time;Lufttemperatur;Sonne\n2026-10-17 06:00;293,15;0,25\n2026-10-17 07:00;294,15;0,5\n'
    const { document } = skyOf(text, {
      ...ONE,
      columns: { airTempC: 'Lufttemperatur', ghiWm2: 'Sonne' },
      units: { airTempC: 'K', ghiWm2: 'kW/m²' },
      averaging: { default: 'following' },
    })
    expect(document.places[0]).toMatchObject({ airTempC: [20, 21], ghiWm2: [250, 500] })
    expect(document.averaging).toEqual({ airTempC: 'following', ghiWm2: 'following' })
  })
})

describe('times of a weather table', () => {
  const light = 'ghi (W/m2, preceding),temp C'
  const at = (text: string, options: SkyTableOptions = ONE) => skyOf(text, options).document.places[0].at

  it.each([
    { what: 'ISO in UTC', rows: ['2026-10-17T06:00:00Z', '2026-10-17T07:00:00Z'], offset: '+00:00' },
    { what: 'local with the offset given', rows: ['2026-10-17 06:00', '2026-10-17 07:00'], offset: '+02:00' },
    { what: 'day first with dots', rows: ['17.10.2026 06:00', '17.10.2026 07:00'], offset: '+02:00' },
    { what: 'packed', rows: ['20261017:0600', '20261017:0700'], offset: '+02:00' },
    { what: 'a half-hour zone', rows: ['2026-10-17T06:00-03:30', '2026-10-17T07:00-0330'], offset: '-03:30' },
  ])('are read as $what', ({ rows, offset }) => {
    expect(at(`time,${light}\n${rows.map((r) => `${r},1,2`).join('\n')}`)).toEqual([
      `2026-10-17T06:00:00${offset}`,
      `2026-10-17T07:00:00${offset}`,
    ])
  })
  it('of a day and an hour roll over at 24', () => {
    expect(at(`date,hour,${light}\n2026-12-31,23,1,2\n2026-12-31,24,1,2\n2027-01-01,1,1,2`)).toEqual([
      '2026-12-31T23:00:00+02:00',
      '2027-01-01T00:00:00+02:00',
      '2027-01-01T01:00:00+02:00',
    ])
    expect(at(`date,time,${light}\n2026-10-17,23:00,1,2\n2026-10-17,24:00,1,2`)[1]).toBe('2026-10-18T00:00:00+02:00')
  })
  it('have the offset of the header before the one given', () => {
    expect(at(`time (UTC-3),${light}\n2026-10-17 06:00,1,2\n2026-10-17 07:00,1,2`)[0]).toBe('2026-10-17T06:00:00-03:00')
    expect(at(`UTC time,${light}\n2026-10-17 06:00,1,2\n2026-10-17 07:00,1,2`)[0]).toBe('2026-10-17T06:00:00+00:00')
  })
})

describe('places of a weather table', () => {
  const header = 'place,lat,lon,elevation (m),time,"ghi (W/m2, preceding)",temp (C)'
  it('are told apart by name, each with its own rows in any order of places', () => {
    const { document, summary } = skyOf(
      `${header}\nSaltpan,-31,21,1180,2026-10-17T06:00Z,1,10\nTwin Wells,-30,21.5,1300,2026-10-17T06:00Z,2,11\nSaltpan,-31,21,1180,2026-10-17T07:00Z,3,12\nTwin Wells,-30,21.5,1300,2026-10-17T07:00Z,4,13\n`,
      BASE,
    )
    expect(
      document.places.map(({ name, latDeg, lonDeg, elevationM, ghiWm2 }) => [name, latDeg, lonDeg, elevationM, ghiWm2]),
    ).toEqual([
      ['Saltpan', -31, 21, 1180, [1, 3]],
      ['Twin Wells', -30, 21.5, 1300, [2, 4]],
    ])
    expect(summary.places).toHaveLength(2)
  })
  it('without a name are named by where they are', () => {
    const text =
      'lat,lon,elev_ft,time,"cloud (%, instant)",temp (C)\n-31,21,1000,2026-10-17T06:00Z,1,10\n-31,21,1000,2026-10-17T07:00Z,1,10'
    expect(skyOf(text, BASE).document.places[0]).toMatchObject({ name: '-31, 21', elevationM: 304.8 })
  })
  it('that move between rows are refused at the row', () => {
    const text = `${header}\nSaltpan,-31,21,1180,2026-10-17T06:00Z,1,10\nSaltpan,-31.5,21,1180,2026-10-17T07:00Z,3,12`
    expect(problemsOf(text, BASE)).toMatchObject([{ field: 'lat', value: '"-31.5"', line: 3, column: 9 }])
  })
})

describe('NOAA’s measured day, as a table of one minute', () => {
  // The file's columns as its own README has them. @source NOAA SURFRAD, test/reference/surfrad-slv16001.dat
  it('comes in with every minute, its night offsets taken as dark and its gaps as gaps', () => {
    const lines = referenceText('surfrad-slv16001.dat')
      .split('\n')
      .slice(2)
      .filter((line) => line.trim() !== '')
    const two = (text: string) => text.padStart(2, '0')
    const table = lines.map((line) => {
      const c = line.trim().split(/\s+/)
      const stamp = `${c[0]}-${two(c[2])}-${two(c[3])}T${two(c[4])}:${two(c[5])}Z`
      return [stamp, c[8], c[12], c[14], c[38], c[40], c[42], c[44], c[46]].join(',')
    })
    const header =
      'time,"ghi (W/m2, preceding)",dni (W/m2 ; preceding),dhi (W/m2; preceding),temp (C),rh (%),wind (m/s),wind from (deg),station pressure (mb)'
    const { document, summary } = skyOf([header, ...table].join('\n'), { ...BASE, source: 'measured', place: PLACE })
    expect(summary.places).toEqual([{ name: 'Saltpan', rows: lines.length }])
    expect(lines.length).toBe(1440)
    expect(summary.stepMinutes).toBe(1)
    const [{ ghiWm2 = [] }] = document.places
    const raw = lines.map((line) => Number(line.trim().split(/\s+/)[8]))
    expect(raw.some((w) => w < 0)).toBe(true)
    raw.forEach((w, i) => expect(ghiWm2[i]).toBe(w <= -9999 ? null : Math.max(w, 0)))
  })
})
