import { describe, expect, it } from 'vitest'
import { COAST_TABLE, coastExample } from '../../server/api/examples/coast-down.ts'
import { readCsvCoast } from '../../server/files/csv-coast.ts'
import type { CoastTableOptions } from '../../server/files/coast-table.ts'

const document = (text: string, options?: CoastTableOptions) => {
  const reading = readCsvCoast(text, options)
  if (reading.problems !== undefined) throw new Error(JSON.stringify(reading.problems))
  return reading
}

const problems = (text: string, options?: CoastTableOptions) => readCsvCoast(text, options).problems ?? []

const RUNS = [
  'time (s),speed (km/h),run,direction',
  '0,80,1,there',
  '1,79.5,1,there',
  '2,79,1,there',
  '60,81,2,back',
  '61,80,2,back',
].join('\n')

describe('a logged table', () => {
  it('gives its runs with their ways', () => {
    const { document: read, summary } = document(RUNS)
    expect(read.runs).toEqual([
      { name: 'run 1, there', direction: 'there', timeS: [0, 1, 2], speedKmh: [80, 79.5, 79] },
      { name: 'run 2, back', direction: 'back', timeS: [60, 61], speedKmh: [81, 80] },
    ])
    expect(summary.runs).toEqual([
      { direction: 'there', rows: 3, line: 2 },
      { direction: 'back', rows: 2, line: 5 },
    ])
    expect(summary.columns).toContainEqual({ field: 'speedKmh', header: 'speed (km/h)', unit: 'km/h' })
  })

  it('of the worked example gives its document', () => {
    const { document: read } = document(COAST_TABLE)
    expect(read.runs.map(({ name, ...run }) => [typeof name, run])).toEqual(
      coastExample.runs.map(({ name, ...run }) => [typeof name, run]),
    )
  })

  it('is read with semicolons, decimal commas, metres a second and words of other kinds', () => {
    const text =
      'Elapsed time [ms];Ground speed (m/s);Way\n0;20,5;out\n500;20,25;out\n9000;20;return\n9500;19,5;return\n'
    expect(document(text).document.runs).toEqual([
      { name: 'run 1, there', direction: 'there', timeS: [0, 0.5], speedKmh: [73.8, 72.9] },
      { name: 'run 2, back', direction: 'back', timeS: [9, 9.5], speedKmh: [72, 70.2] },
    ])
  })

  it('may be timed by a clock with parts of a second, past midnight', () => {
    const text = 'clock,speed (km/h),direction\n23:59:59.8,80,there\n23:59:59.9,79,there\n00:00:00.1,78,there\n'
    const [{ timeS }] = document(text).document.runs
    expect(timeS[1] - timeS[0]).toBeCloseTo(0.1, 6)
    expect(timeS[2] - timeS[0]).toBeCloseTo(0.3, 6)
  })

  it('may be timed by stamps, whose offsets count', () => {
    const text =
      'timestamp,speed (km/h),direction\n2026-10-17T08:00:00.25+02:00,80,there\n2026-10-17T06:00:00.75Z,79,there\n'
    const [{ timeS }] = document(text).document.runs
    expect(timeS[1] - timeS[0]).toBeCloseTo(0.5, 6)
    // By hand: 2026-10-17 06:00 UTC is day 20,743 after 1970.
    expect(timeS[0]).toBeCloseTo(20_743 * 86_400 + 6 * 3600 + 0.25, 5)
  })

  it.each([
    ['time s', '2', 2],
    ['time_ms', '2000', 2],
    ['t (min)', '0.5', 30],
    ['seconds', '3', 3],
  ])('under "%s" takes %s as %d s', (header, cell, seconds) => {
    const text = `${header},speed (km/h),direction\n0,80,there\n${cell},79,there\n`
    expect(document(text).document.runs[0].timeS).toEqual([0, seconds])
  })

  it('is parted by heading where no column says the way', () => {
    const rows = [88, 92, 90, 271, 269, 91].map((heading, i) => `${i},80,${heading}`)
    const { runs } = document(`time (s),speed (km/h),heading (°)\n${rows.join('\n')}\n`).document
    expect(runs.map(({ direction, timeS }) => [direction, timeS.length])).toEqual([
      ['there', 3],
      ['back', 2],
      ['there', 1],
    ])
  })

  it('across north parts nothing that belongs together', () => {
    const rows = [359, 1, 358, 2].map((heading, i) => `${i},80,${heading}`)
    expect(document(`time (s),speed (km/h),course\n${rows.join('\n')}\n`).document.runs).toHaveLength(1)
  })

  it('may say that runs alternate', () => {
    const text = 'time (s),speed (km/h),run\n0,80,A1\n1,79,A1\n0,80,A2\n1,79,A2\n0,80,A3\n1,79,A3\n'
    expect(document(text, { directions: 'alternate' }).document.runs.map(({ direction }) => direction)).toEqual([
      'there',
      'back',
      'there',
    ])
  })

  it('leaves out rows between runs and rows without a speed, and says how many', () => {
    const text =
      'time (s),speed (km/h),run,direction\n0,80,1,there\n1,,1,there\n2,79,1,there\n3,30,,\n4,31,-,\n60,81,2,back\n'
    const { document: read, notices } = document(text)
    expect(read.runs.map(({ timeS }) => timeS)).toEqual([[0, 2], [60]])
    expect(notices.map(({ detail }) => detail)).toEqual([
      '2 rows belong to no run; left out',
      '1 rows without a speed; left out',
    ])
  })

  it('takes grade, headwind and crosswind along', () => {
    const text =
      'time (s),speed (km/h),direction,grade (%),headwind (km/h),crosswind (m/s)\n0,80,there,0.5,3.6,-1\n1,79,there,-0.5,7.2,2\n'
    expect(document(text).document.runs[0]).toMatchObject({
      gradePct: [0.5, -0.5],
      headwindMps: [1, 2],
      crosswindMps: [-1, 2],
    })
  })

  it('turns wind and its direction to headwind and crosswind: 5 m/s from 180°', () => {
    // By hand: heading 180 → +5, 0 → −5, 150 → 4.330 and 2.5 across.
    const wind = (heading: number) => {
      const text = `time (s),speed (km/h),direction,heading,wind speed (m/s),wind from (°)\n0,80,there,${heading},5,180\n`
      return document(text).document.runs[0]
    }
    expect(wind(180).headwindMps?.[0]).toBeCloseTo(5, 9)
    expect(wind(0).headwindMps?.[0]).toBeCloseTo(-5, 9)
    expect(wind(150).headwindMps?.[0]).toBeCloseTo(4.33, 3)
    expect(wind(150).crosswindMps?.[0]).toBeCloseTo(2.5, 9)
  })

  it('may have its columns mapped by hand', () => {
    const text = 'Zeit,Tempo,Weg\n0,20,there\n1000,19,there\n'
    const columns = { time: 'Zeit', speedKmh: 'Tempo', direction: 'Weg' }
    const read = document(text, { columns, units: { time: 'ms', speedKmh: 'm/s' } })
    expect(read.document.runs[0]).toMatchObject({ timeS: [0, 1], speedKmh: [72, 68.4] })
  })

  it('says what it did on its own', () => {
    const text = 'time (s),speed (km/h),direction,grade,mood,wind (m/s),headwind (m/s)\n0,80,there,0.1,good,4,1\n'
    const { notices, document: read } = document(text)
    expect(notices.map(({ detail }) => detail)).toEqual([
      'columns not read: mood',
      'grade: no unit stated, taken as %',
      'wind (m/s): not read, since the headwind is there',
    ])
    expect(read.runs[0].headwindMps).toEqual([1])
  })
})

describe('a table that is wrong is refused by line and column:', () => {
  const changed = (line: number, row: string): string =>
    RUNS.split('\n')
      .with(line - 1, row)
      .join('\n')

  it.each<[string, string, number, number, string]>([
    ['a speed that is none', changed(3, '1,fast,1,there'), 3, 3, 'a number with a decimal point'],
    ['a speed beyond its range', changed(3, '1,301,1,there'), 3, 3, 'expected 0 to 300 km/h'],
    ['a time that is none', changed(3, 'soon,79,1,there'), 3, 1, 'expected seconds from 0'],
    ['a time below 0', changed(3, '-1,79,1,there'), 3, 1, 'expected seconds from 0'],
    ['no time in a row', changed(3, ',79,1,there'), 3, 1, 'in every row'],
    ['time that goes back', changed(4, '0.5,79,1,there'), 4, 1, 'expected a later time than in the row before'],
    ['time that stands', changed(4, '1,79,1,there'), 4, 1, 'expected a later time'],
    ['a way that is none', changed(3, '1,79.5,1,up'), 3, 10, 'expected "there" or "back"'],
    ['a way that changes within a run', changed(4, '2,79,1,back'), 4, 8, 'expected "there" as in the rows of this run'],
    ['a run that comes twice', `${RUNS}\n62,79,1,there`, 7, 7, 'expected a run in one piece'],
    ['no way', 'time (s),speed (km/h)\n0,80\n', 1, 1, 'which way each run went'],
    ['no speed', 'time (s),direction\n0,there\n', 1, 1, 'Say which with columns: { speedKmh'],
    ['no time', 'speed (km/h),direction\n80,there\n', 1, 1, 'Say which with columns: { time'],
    ['a speed without a unit', 'time,speed,direction\n0,80,there\n', 1, 6, 'no unit stated: expected km/h, mph or m/s'],
    [
      'a time in a unit nobody knows',
      'time (weeks),speed (km/h),direction\n0,80,there\n',
      1,
      1,
      'unit "weeks" unknown',
    ],
    [
      'a clock that is none',
      'time,speed (km/h),direction\n08:00:00,80,there\n08:61:00,80,there\n',
      3,
      1,
      'such as 08:15:30.2',
    ],
    ['no decimal sign that holds', 'time (s),speed (km/h),direction\n"0,5",80.5,there\n', 2, 1, 'decimal'],
    [
      'a gap in a column of grades',
      'time (s),speed (km/h),direction,grade (%)\n0,80,there,1\n1,79,there,\n',
      3,
      12,
      'a value in every row',
    ],
    [
      'wind without its direction',
      'time (s),speed (km/h),direction,wind (m/s)\n0,80,there,1\n',
      1,
      1,
      'beside the wind’s speed',
    ],
    [
      'crosswind without headwind',
      'time (s),speed (km/h),direction,crosswind (m/s)\n0,80,there,1\n',
      1,
      1,
      'the headwind beside',
    ],
    [
      'a heading across the road',
      'time (s),speed (km/h),run,heading\n0,80,1,0\n0,80,2,90\n',
      3,
      8,
      'expected about 0° or 180°',
    ],
    [
      'a heading that turns in a run',
      'time (s),speed (km/h),run,heading\n0,80,1,0\n1,80,1,1\n2,80,1,150\n',
      4,
      8,
      'it turns here',
    ],
    ['only empty rows', 'time (s),speed (km/h),run,direction\n0,80,,\n', 1, 1, 'rows with a time and a speed'],
  ])('%s', (_name, text, line, column, words) => {
    const found = problems(text)
    expect(found[0]).toMatchObject({ line, column })
    expect(found[0].detail).toContain(words)
  })

  it('too many runs and too many rows', () => {
    const runs = Array.from({ length: 61 }, (_, i) => `${i},80,${i},there`)
    expect(problems(`time (s),speed (km/h),run,direction\n${runs.join('\n')}\n`)[0]).toMatchObject({
      value: '61 runs',
      line: 62,
    })
    const rows = Array.from({ length: 100_001 }, (_, i) => `${i},80,there`)
    const tooMany = problems(`time (s),speed (km/h),direction\n${rows.join('\n')}\n`)
    expect(tooMany[0].detail).toContain('100000')
  })

  it('options that nobody knows', () => {
    const options: unknown = { mood: 'good' }
    expect(problems(RUNS, options as CoastTableOptions)[0].field).toBe('mood')
  })
})
