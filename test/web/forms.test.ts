import { describe, expect, it } from 'vitest'
import { raceDocument } from '../../server/documents/race.ts'
import { climateOptions } from '../../server/files/climate-options.ts'
import { skyTableOptions } from '../../server/files/sky-table.ts'
import { answerFreshness, forecastFreshness } from '../../web/age.ts'
import { fileType, headerOf, yearKindOf } from '../../web/files.ts'
import { parseDocument } from '../../web/json-document.ts'
import { emptyRace, lacksOf, raceOf } from '../../web/race-form.ts'
import { emptySky, offsetName, skyOptions, yearOptions } from '../../web/sky-form.ts'

describe('a race day made from the form', () => {
  const form = {
    ...emptyRace('2026-10-17', 'Africa/Windhoek', 'plateau-run'),
    name: 'Plateau day',
    openingPct: '56,5',
    targetPct: '40',
    start: 'Saltpan',
    finish: 'Blue Gate',
    stops: [
      { name: 'Quiver Ridge', km: '402', minutes: '30' },
      { name: 'Twin Wells', km: '196', minutes: '20' },
    ],
  }

  it('is a race document with one stage between every two places, in the order of the road', () => {
    const race = raceDocument.parse(raceOf(form))
    expect(race.openingPct).toBe(56.5)
    expect(race.days[0].targetPct).toBe(40)
    expect(race.days[0].charging).toHaveLength(2)
    expect(race.days[0].stages.map((s) => [s.start, s.finish, s.fromKm, s.toKm, s.stop?.minutes])).toEqual([
      ['Saltpan', 'Twin Wells', 0, 196, 20],
      ['Twin Wells', 'Quiver Ridge', 196, 402, 30],
      ['Quiver Ridge', 'Blue Gate', 402, undefined, undefined],
    ])
  })

  it('without stops and target is one stage', () => {
    const race = raceDocument.parse(raceOf({ ...form, stops: [], targetPct: ' ' }))
    expect(race.days[0].stages).toHaveLength(1)
    expect(race.days[0].targetPct).toBeUndefined()
  })

  it('says what it still lacks before anything is sent', () => {
    expect(lacksOf(form)).toEqual([])
    const bad = { ...form, name: ' ', route: '', openingPct: 'full', stops: [{ name: '', km: 'x', minutes: '' }] }
    expect(lacksOf(bad).map((lack) => lack.field)).toEqual([
      'Name',
      'Route',
      'Opening charge',
      'Stop 1',
      'Stop 1',
      'Stop 1',
    ])
  })
})

describe('what is said about a weather table', () => {
  const form = { ...emptySky('plain 16 Oct.csv', Date.UTC(2026, 9, 16, 16, 0), 120, []), columns: {} }

  it('starts from the file’s name and this hour, and leaves the rest to the table', () => {
    const options = skyTableOptions.parse(skyOptions(form))
    expect(options).toEqual({ name: 'plain 16 Oct', source: 'forecast', issuedAt: '2026-10-16T18:00:00+02:00' })
  })

  it('carries offset, convention, place and columns said by hand', () => {
    const options = skyTableOptions.parse(
      skyOptions({
        ...form,
        utcOffset: '+09:30',
        averaging: 'preceding',
        placeName: 'Plain',
        latDeg: '-23,1',
        lonDeg: '17.4',
        elevationM: '1200',
        columns: { Bewölkung: { field: 'cloudPct', unit: 'oktas' }, Rest: { field: '', unit: 'm' } },
      }),
    )
    expect(options).toMatchObject({
      issuedAt: '2026-10-16T18:00:00+09:30',
      utcOffset: '+09:30',
      averaging: { default: 'preceding' },
      place: { name: 'Plain', latDeg: -23.1, lonDeg: 17.4, elevationM: 1200 },
      columns: { cloudPct: 'Bewölkung' },
      units: { cloudPct: 'oktas' },
    })
  })

  it('of a typical year is which days it stands for: the race’s, or today', () => {
    expect(climateOptions.parse(yearOptions(form))).toEqual({
      name: 'plain 16 Oct',
      from: '2026-10-16',
      to: '2026-10-16',
    })
    const days = ['2026-10-16', '2026-10-17', '2026-10-18']
    const ofRace = emptySky('year.epw', Date.UTC(2026, 7, 1), 120, days)
    expect(yearOptions(ofRace)).toMatchObject({ name: 'year', from: '2026-10-16', to: '2026-10-18' })
  })

  it('offsets are written with sign and two digits', () => {
    expect([0, 120, -210, 345].map(offsetName)).toEqual(['+00:00', '+02:00', '-03:30', '+05:45'])
  })
})

describe('files', () => {
  it('are sent under the type of their ending', () => {
    expect(['a.GPX', 'b.json', 'c.csv', 'd.txt'].map(fileType)).toEqual([
      'application/gpx+xml',
      'application/json',
      'text/csv',
      'text/csv',
    ])
  })

  it('show the headers of a table, quotes and comments minded', async () => {
    const table = '\ufeff# a note, with commas\n"GHI (W/m2, preceding hour)",time , air temperature (°C)\n1,2,3\n'
    expect(await headerOf(new Blob([table]))).toEqual(['GHI (W/m2, preceding hour)', 'time', 'air temperature (°C)'])
    expect(await headerOf(new Blob(['a;b;"c,d"\r\n1;2;3']))).toEqual(['a', 'b', 'c,d'])
  })

  it('of a typical year are known by their first two lines', async () => {
    const kindOf = (text: string) => yearKindOf(new Blob([text]))
    expect(await kindOf('\ufeffLOCATION,Saltpan,-,XXX\r\nDESIGN CONDITIONS,0\r\n')).toBe('epw')
    expect(await kindOf('1,"A",NC,-5,36,-79,273\nDate (MM/DD/YYYY),Time (HH:MM),GHI (W/m^2)\n')).toBe('tmy3')
    expect(await kindOf('time,GHI (W/m2)\n2026-10-17T06:00Z,1\n')).toBe('other')
  })

  it('that are not JSON say where they stop being it', () => {
    const wrong = parseDocument('{\n  "name": "x",\n  "body": }\n')
    expect('problem' in wrong && wrong.problem).toMatchObject({ line: 3, column: 11 })
    expect('problem' in parseDocument('[1]')).toBe(true)
    expect(parseDocument('{"name":"x"}')).toEqual({ document: { name: 'x' } })
  })
})

it('a forecast is fresh to 2 h and old after 12 h', () => {
  const h = 3_600_000
  expect([2 * h, 2 * h + 1, 12 * h, 12 * h + 1].map(forecastFreshness)).toEqual(['fresh', 'ageing', 'ageing', 'old'])
  expect([0, h, 3 * h].map(answerFreshness)).toEqual(['fresh', 'ageing', 'old'])
})
