import { describe, expect, it } from 'vitest'
import { readCsvSky } from '../../server/files/csv-sky.ts'
import type { SkyTableOptions } from '../../server/files/sky-table.ts'

const PLACE = { name: 'Saltpan', latDeg: -31, lonDeg: 21, elevationM: 1180 }
const BASE: SkyTableOptions = { name: 'Evening run', source: 'forecast', issuedAt: '2026-10-16T18:00:00Z' }
const ONE: SkyTableOptions = { ...BASE, place: PLACE, utcOffset: '+02:00' }

function problemsOf(text: string, options: SkyTableOptions = ONE) {
  const { problems } = readCsvSky(text, options)
  if (problems === undefined) throw new Error('expected problems, got a sky')
  return problems
}

/** One column beside time and temperature, its values at hourly stamps. */
const column = (header: string, ...values: (string | number)[]) =>
  `time;temp (°C);cloud (%, instant);wind from (deg);${header}\n${values.map((v, i) => `2026-10-17T0${i + 6}:00;20;10;180;${v}`).join('\n')}\n`

describe('a weather table that is wrong', () => {
  const rows = '\n2026-10-17 06:00,1,20\n2026-10-17 07:00,2,21'
  const ok = `time,"ghi (W/m2, preceding)",temp C`
  const CASES: {
    what: string
    text: string
    options?: SkyTableOptions
    field: string
    says: string
    line: number
    column?: number
  }[] = [
    {
      what: 'light of no stated convention',
      text: `time,GHI (W/m2),temp C${rows}`,
      field: 'ghiWm2',
      says: 'averaging: { default: "preceding" }',
      line: 1,
      column: 6,
    },
    {
      what: 'cloud of no stated convention',
      text: `time,cloud (%),temp C${rows}`,
      field: 'cloudPct',
      says: 'what its stamps speak for',
      line: 1,
    },
    {
      what: 'light without unit',
      text: `time,"GHI (preceding)",temp C${rows}`,
      field: 'ghiWm2',
      says: 'no unit stated',
      line: 1,
    },
    {
      what: 'temperature without unit',
      text: `time,"GHI (W/m2, preceding)",temp${rows}`,
      field: 'airTempC',
      says: '°C, °F or K',
      line: 1,
    },
    {
      what: 'an energy of an instant',
      text: `time,"GHI (kJ/m2, instant)",temp C${rows}`,
      field: 'ghiWm2',
      says: 'energy of an interval',
      line: 1,
    },
    {
      what: 'two conventions for a column and its bound',
      text: `time,"GHI (W/m2, preceding)","GHI P10 (W/m2, following)",temp C\n2026-10-17 06:00,1,1,2\n2026-10-17 07:00,1,1,2`,
      field: 'ghiWm2',
      says: 'one convention',
      line: 1,
    },
    {
      what: 'no offset',
      text: `${ok}${rows}`,
      options: { ...BASE, place: PLACE },
      field: 'time',
      says: 'utcOffset: "+02:00"',
      line: 2,
      column: 1,
    },
    {
      what: 'no place',
      text: `${ok}${rows}`,
      options: { ...BASE, utcOffset: '+02:00' },
      field: 'place',
      says: 'the one place',
      line: 1,
    },
    {
      what: 'no elevation beside lat and lon',
      text: `lat,lon,${ok}\n1,2,2026-10-17 06:00,1,2\n1,2,2026-10-17 07:00,1,2`,
      field: 'elevationM',
      says: 'beside the other place columns',
      line: 1,
    },
    {
      what: 'no time',
      text: `a,"ghi (W/m2, preceding)",temp C${rows}`,
      field: 'time',
      says: 'expected a column "time"',
      line: 1,
    },
    {
      what: 'month first',
      text: `${ok}\n10/17/2026 06:00,1,2\n10/17/2026 07:00,1,2`,
      field: 'time',
      says: 'such as 2026-10-17T08:00',
      line: 2,
      column: 1,
    },
    {
      what: 'the 31st of February',
      text: `${ok}\n2026-02-31 06:00,1,2\n2026-03-01 07:00,1,2`,
      field: 'time',
      says: 'a time such as',
      line: 2,
    },
    {
      what: 'hour 25',
      text: `date,hour,"ghi (W/m2, preceding)",temp C\n2026-10-17,24,1,2\n2026-10-17,25,1,2`,
      field: 'hour',
      says: '24:00',
      line: 3,
      column: 12,
    },
    {
      what: 'a repeated stamp',
      text: `${ok}${rows}\n2026-10-17 07:00,2,21`,
      field: 'time',
      says: 'found the same',
      line: 4,
      column: 1,
    },
    {
      what: 'a step back',
      text: `${ok}${rows}\n2026-10-17 05:00,2,21`,
      field: 'time',
      says: 'found an earlier one',
      line: 4,
    },
    {
      what: 'a missing hour',
      text: `${ok}${rows}\n2026-10-17 08:00,2,21\n2026-10-17 10:00,2,21`,
      field: 'time',
      says: 'expected 60 min after the row before as elsewhere, found 120 min',
      line: 5,
    },
    { what: 'one row', text: `${ok}\n2026-10-17 07:00,2,21`, field: 'time', says: 'at least 2 rows', line: 2 },
    {
      what: 'too much sun',
      text: `${ok}${rows}\n2026-10-17 08:00,1601,21`,
      field: 'ghi (W/m2, preceding)',
      says: '0 to 1600 W/m²',
      line: 4,
      column: 18,
    },
    {
      what: 'too dark a night',
      text: `${ok}${rows}\n2026-10-17 08:00,-21,21`,
      field: 'ghi (W/m2, preceding)',
      says: '0 to 1600 W/m²',
      line: 4,
    },
    {
      what: 'Fahrenheit under °C',
      text: `${ok}${rows}\n2026-10-17 08:00,1,88`,
      field: 'temp C',
      says: '-60 to 60 °C',
      line: 4,
    },
    {
      what: 'wind without direction',
      text: `time,"ghi (W/m2, preceding)",temp C,wind (m/s)\n2026-10-17 06:00,1,2,3\n2026-10-17 07:00,1,2,3`,
      field: 'windFromDeg',
      says: 'comes from',
      line: 2,
    },
    {
      what: 'no temperature',
      text: `time,"ghi (W/m2, preceding)"\n2026-10-17 06:00,1\n2026-10-17 07:00,1`,
      field: 'airTempC',
      says: 'air temperatures',
      line: 2,
    },
    {
      what: 'temperatures all missing',
      text: `${ok}\n2026-10-17 06:00,1,NA\n2026-10-17 07:00,1,-`,
      field: 'airTempC',
      says: 'air temperatures',
      line: 2,
    },
    {
      what: 'no light',
      text: `time,temp C\n2026-10-17 06:00,1\n2026-10-17 07:00,1`,
      field: 'cloudPct',
      says: 'cloud cover, or GHI',
      line: 2,
    },
    {
      what: 'pressure of no stated height',
      text: column('pressure (hPa)', 884, 884),
      field: 'pressureHpa',
      says: 'pressureIs: "station" or "sea-level"',
      line: 1,
    },
    {
      what: 'pressure said to be elsewhere than its header',
      text: column('mslp (hPa)', 1014, 1014),
      options: { ...ONE, pressureIs: 'station' },
      field: 'pressureHpa',
      says: 'as its header says',
      line: 1,
    },
    {
      what: 'P10 over P90',
      text: `time,temp C,"cloud (%, instant)","cloud P10 (%)",cloud P90 (%)\n2026-10-17 06:00,1,5,1,9\n2026-10-17 07:00,1,5,9,1`,
      field: 'cloud P10 (%)',
      says: 'P10 is the low end',
      line: 3,
    },
    {
      what: 'two winds',
      text: `time,wind (m/s),"wind speed (km/h)",temp C\n2026-10-17 06:00,1,2,3\n2026-10-17 07:00,1,2,3`,
      field: 'windMps',
      says: 'means the same',
      line: 1,
    },
    {
      what: 'no compass point',
      text: `time,"ghi (W/m2, preceding)",temp C,wind dir\n2026-10-17 06:00,1,2,NORTHISH\n2026-10-17 07:00,1,2,N`,
      field: 'wind dir',
      says: 'a number',
      line: 2,
    },
  ]
  it.each(CASES)('is refused by field and line: $what', ({ text, options, field, says, line, column }) => {
    const [problem] = problemsOf(text, options)
    expect(problem).toMatchObject({ field, line, ...(column !== undefined && { column }) })
    expect(problem.detail).toContain(says)
  })

  it('has its options checked by name', () => {
    const [problem] = problemsOf(`${ok}${rows}`, { ...ONE, utcOffset: '2' })
    expect(problem.field).toBe('utcOffset')
  })
  it('is refused for a place of more than 6,000 rows', () => {
    const many = Array.from(
      { length: 6002 },
      (_, i) => `${new Date(Date.UTC(2026, 0, 1) + i * 3.6e6).toISOString().slice(0, 16)}Z,1,2`,
    )
    expect(problemsOf(`${ok}\n${many.join('\n')}`)).toMatchObject([
      { line: 6002, detail: 'expected at most 6000 rows for a place (Saltpan)' },
    ])
  })
})
