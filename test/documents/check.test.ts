import { describe, expect, test } from 'vitest'
import { carDocument } from '../../server/documents/car.ts'
import { checkDocument, MOST_PROBLEMS } from '../../server/documents/check.ts'
import type { Problem } from '../../server/documents/problem.ts'
import { raceDocument } from '../../server/documents/race.ts'
import { routeDocument } from '../../server/documents/route.ts'
import { skyDocument } from '../../server/documents/sky.ts'
import { speedsDocument } from '../../server/documents/speeds.ts'
import { someCar, someRace, someRoute, someSky } from '../support/scenario.ts'

type Change = (document: Record<string, never>) => void

/** The problems of a document after one change. */
function problemsOf(schema: Parameters<typeof checkDocument>[0], document: unknown, change: Change): Problem[] {
  const copy = structuredClone(document) as Record<string, never>
  change(copy)
  return checkDocument(schema, copy).problems ?? []
}

/** Sets a value at a path, making no new steps on the way. */
const set =
  (path: (string | number)[], value: unknown): Change =>
  (document) => {
    let at = document as Record<string | number, never>
    for (const step of path.slice(0, -1)) at = at[step]
    ;(at as Record<string | number, unknown>)[path[path.length - 1]] = value
  }

const CASES: [string, Parameters<typeof checkDocument>[0], unknown, (string | number)[], unknown, Partial<Problem>][] =
  [
    [
      'a mass below the range',
      carDocument,
      someCar(),
      ['body', 'massKg'],
      3,
      { field: 'body.massKg', value: '3', detail: 'expected at least 20' },
    ],
    [
      'a pitch that is text',
      carDocument,
      someCar(),
      ['panels', 1, 'pitchDeg'],
      'steep',
      { field: 'panels[1].pitchDeg', value: '"steep"', detail: 'expected a number' },
    ],
    [
      'an unknown field',
      carDocument,
      someCar(),
      ['body', 'colour'],
      'red',
      { field: 'body.colour', detail: 'unknown field; expected none of this name' },
    ],
    [
      'a string without a tracker of that name',
      carDocument,
      someCar(),
      ['strings', 0, 'tracker'],
      'Old one',
      { field: 'strings[0].tracker', value: '"Old one"', detail: 'expected one of "deck tracker", "nose tracker"' },
    ],
    [
      'a string on no panel of the car',
      carDocument,
      someCar(),
      ['strings', 1, 'cells', 0, 'panel'],
      'roof',
      { field: 'strings[1].cells[0].panel', value: '"roof"' },
    ],
    [
      'two strings on one tracker',
      carDocument,
      someCar(),
      ['strings', 1, 'tracker'],
      'deck tracker',
      { field: 'strings[1].tracker', detail: 'expected a tracker that holds no other string' },
    ],
    [
      'a window upside down',
      carDocument,
      someCar(),
      ['trackers', 0, 'window', 'inputMaxV'],
      20,
      { field: 'trackers[0].window.inputMaxV', value: '20', detail: 'expected more than inputMinV (30)' },
    ],
    [
      'a tracker with neither losses nor bench',
      carDocument,
      someCar(),
      ['trackers', 0, 'losses'],
      undefined,
      { field: 'trackers[0].losses', detail: 'expected either losses or bench, exactly one of the two' },
    ],
    [
      'a pack table that does not start empty',
      carDocument,
      someCar(),
      ['pack', 'cellOcv', 0, 'chargePct'],
      5,
      { field: 'pack.cellOcv[0].chargePct', value: '5', detail: 'expected 0 in the first row' },
    ],
    [
      'a pack voltage that falls with charge',
      carDocument,
      someCar(),
      ['pack', 'cellOcv', 3, 'restingV'],
      3,
      { field: 'pack.cellOcv[3].restingV', value: '3' },
    ],
    [
      'an efficiency over one',
      carDocument,
      someCar(),
      ['drive', 'efficiencyPct'],
      101,
      { field: 'drive.efficiencyPct', value: '101', detail: 'expected at most 100' },
    ],
    [
      'half a cell',
      carDocument,
      someCar(),
      ['pack', 'seriesCells'],
      30.5,
      { field: 'pack.seriesCells', value: '30.5', detail: 'expected a whole number' },
    ],
    [
      'a latitude off the globe',
      routeDocument,
      someRoute(2),
      ['points', 'latDeg', 2],
      -91,
      { field: 'points.latDeg[2]', value: '-91', detail: 'expected at least -90' },
    ],
    [
      'a longitude too few',
      routeDocument,
      someRoute(2),
      ['points', 'lonDeg'],
      [17, 17],
      { field: 'points.lonDeg', detail: 'expected as many values as latDeg (5)' },
    ],
    [
      'a stretch that runs backwards',
      routeDocument,
      { ...someRoute(2), stretches: [{ fromKm: 1, toKm: 2 }] },
      ['stretches', 0, 'toKm'],
      0.5,
      { field: 'stretches[0].toKm', value: '0.5', detail: 'expected more than fromKm' },
    ],
    [
      'a zone that no clock knows',
      raceDocument,
      someRace(),
      ['zone'],
      'Africa/Saltpan',
      { field: 'zone', value: '"Africa/Saltpan"', detail: 'expected an IANA time zone, for example Africa/Windhoek' },
    ],
    [
      'a date that no calendar has',
      raceDocument,
      someRace(),
      ['days', 0, 'date'],
      '2026-02-30',
      { field: 'days[0].date', value: '"2026-02-30"', detail: 'expected a date as YYYY-MM-DD' },
    ],
    [
      'driving hours that end before they start',
      raceDocument,
      someRace(),
      ['days', 0, 'driving', 'to'],
      '07:00',
      { field: 'days[0].driving.to', value: '"07:00"', detail: 'expected later than from' },
    ],
    [
      'charging before the release',
      raceDocument,
      someRace(),
      ['days', 0, 'charging', 0, 'from'],
      '05:00',
      { field: 'days[0].charging[0].from', value: '"05:00"', detail: 'expected not before the release (06:00)' },
    ],
    [
      'a race without a stage',
      raceDocument,
      someRace(),
      ['days', 0, 'stages'],
      [],
      { field: 'days[0].stages', detail: 'expected at least one stage in the race' },
    ],
    [
      'a stamp without an offset',
      skyDocument,
      someSky(),
      ['places', 0, 'at', 3],
      '2026-10-17T08:00:00',
      { field: 'places[0].at[3]', value: '"2026-10-17T08:00:00"' },
    ],
    [
      'stamps out of order',
      skyDocument,
      someSky(),
      ['places', 0, 'at', 3],
      '2026-10-17T06:30:00+02:00',
      { field: 'places[0].at[3]', detail: 'expected later than the stamp before it (2026-10-17T07:00:00+02:00)' },
    ],
    [
      'a gap of a day',
      skyDocument,
      someSky(),
      ['places', 0, 'at', 14],
      '2026-10-18T19:00:00+02:00',
      {
        field: 'places[0].at[14]',
        detail: 'expected at most 6 h after the stamp before it (2026-10-17T18:00:00+02:00)',
      },
    ],
    [
      'cloud over 100 %',
      skyDocument,
      someSky(),
      ['places', 0, 'cloudPct', 2],
      104,
      { field: 'places[0].cloudPct[2]', value: '104', detail: 'expected at most 100' },
    ],
    [
      'wind without a direction',
      skyDocument,
      someSky(),
      ['places', 0, 'windFromDeg'],
      undefined,
      { field: 'places[0].windFromDeg', detail: 'expected a direction for every wind speed [°]' },
    ],
    [
      'a sky that says nothing of light',
      skyDocument,
      someSky(),
      ['places', 0, 'cloudPct'],
      undefined,
      { field: 'places[0].cloudPct', detail: 'expected cloud cover, or GHI, or DNI with DHI' },
    ],
    [
      'a kind of speeds that there is not',
      speedsDocument,
      { kind: 'constant', speedKmh: 80 },
      ['kind'],
      'fast',
      { field: 'kind', detail: 'expected "constant" or "legs" or "sections" or "meet-target"' },
    ],
    [
      'a highest speed under the lowest',
      speedsDocument,
      { kind: 'meet-target', lowestKmh: 80, highestKmh: 90 },
      ['highestKmh'],
      60,
      { field: 'highestKmh', value: '60', detail: 'expected at least lowestKmh' },
    ],
    [
      'a speed to try that is not whole',
      speedsDocument,
      { kind: 'meet-target' },
      ['lowestKmh'],
      60.5,
      { field: 'lowestKmh', value: '60.5', detail: 'expected a whole number' },
    ],
    [
      'a mass of null',
      carDocument,
      someCar(),
      ['body', 'massKg'],
      null,
      { field: 'body.massKg', value: 'null', detail: 'expected a number' },
    ],
    [
      'a cell type without a name',
      carDocument,
      someCar(),
      ['cellTypes'],
      { '': someCar().cellTypes.silicon },
      { detail: 'expected as a name at least 1 characters' },
    ],
    [
      'bench points too few for four losses',
      carDocument,
      someCar(),
      ['trackers', 0],
      { ...someCar().trackers[0], losses: undefined, bench: [] },
      { field: 'trackers[0].bench', detail: 'expected at least 4 entries' },
    ],
    [
      'a jump in the pack table',
      carDocument,
      someCar(),
      ['pack', 'cellOcv', 1, 'chargePct'],
      1e-9,
      { field: 'pack.cellOcv[1].chargePct', detail: 'expected at least 0.01 more than the row before (0)' },
    ],
    [
      'driving hours of no length, seconds written once',
      raceDocument,
      someRace(),
      ['days', 0, 'driving'],
      { from: '08:00', to: '08:00:00' },
      { field: 'days[0].driving.to', detail: 'expected later than from' },
    ],
    [
      'a stop that closes before it opens',
      raceDocument,
      someRace(),
      ['days', 0, 'stages', 0, 'stop'],
      { minutes: 30, opensAt: '12:00', closesAt: '11:00' },
      { field: 'days[0].stages[0].stop.closesAt', detail: 'expected later than opensAt' },
    ],
    [
      'a direction without wind',
      skyDocument,
      someSky(),
      ['places', 0, 'windMps'],
      undefined,
      { field: 'places[0].windMps', detail: 'expected a speed for every wind direction [m/s]' },
    ],
    [
      'direct sun alone beside the cloud',
      skyDocument,
      someSky(),
      ['places', 0, 'dniWm2'],
      Array.from({ length: 15 }, () => 500),
      { field: 'places[0].dniWm2', detail: 'expected a second of ghiWm2, dniWm2 and dhiWm2 beside it' },
    ],
    [
      'more direct sun than there is above the air',
      skyDocument,
      someSky(),
      ['places', 0, 'dniWm2'],
      Array.from({ length: 15 }, () => 1510),
      { field: 'places[0].dniWm2[0]', value: '1510', detail: 'expected at most 1500' },
    ],
    [
      'humidity only where the temperature is missing',
      skyDocument,
      { ...someSky(), places: [{ ...someSky().places[0], humidityPct: [50, ...Array(14).fill(null)] }] },
      ['places', 0, 'airTempC', 0],
      null,
      { field: 'places[0].humidityPct', detail: 'expected at least one value in a row with an air temperature' },
    ],
    [
      'sea-level pressure only where the temperature is missing',
      skyDocument,
      {
        ...someSky(),
        pressureIs: 'sea-level',
        places: [{ ...someSky().places[0], pressureHpa: [1013, ...Array(14).fill(null)] }],
      },
      ['places', 0, 'airTempC', 0],
      null,
      { field: 'places[0].pressureHpa', detail: 'expected at least one value in a row with an air temperature' },
    ],
    [
      'global and diffuse light that speak for other times, with no direct light',
      skyDocument,
      {
        ...someSky(),
        places: [{ ...someSky().places[0], ghiWm2: Array(15).fill(400), dhiWm2: Array(15).fill(100) }],
      },
      ['averaging'],
      { ghiWm2: 'instant' },
      { field: 'averaging.dhiWm2', detail: 'expected the same as ghiWm2 (instant) where there is no dniWm2' },
    ],
    [
      'speeds with a missing figure',
      speedsDocument,
      { kind: 'constant', speedKmh: 80 },
      ['speedKmh'],
      undefined,
      { field: 'speedKmh', detail: 'expected a number' },
    ],
  ]

describe('a wrong document is refused with field, value and expectation', () => {
  test.each(CASES)('%s', (_name, schema, document, path, value, expected) => {
    const problems = problemsOf(schema, document, set(path, value))
    expect(problems).toContainEqual(expect.objectContaining(expected))
    for (const problem of problems) expect(problem.detail).not.toMatch(/undefined|NaN|\[object/)
  })

  test('the same time written with and without seconds is the same time', () => {
    const race = someRace()
    race.days[0].release = '06:00:00'
    race.days[0].impound = '18:30:00'
    expect(checkDocument(raceDocument, race).problems).toBeUndefined()
  })

  test('every problem is told, not only the first', () => {
    const problems = problemsOf(carDocument, someCar(), (car) => {
      set(['body', 'massKg'], -1)(car)
      set(['drive', 'motorMaxW'], 'strong')(car)
      set(['hat'], 1)(car)
    })
    expect(problems.map((p) => p.field).sort()).toEqual(['body.massKg', 'drive.motorMaxW', 'hat'])
  })

  test('a table of wrong cells is told in at most a hundred lines', () => {
    const route = someRoute(200)
    route.points.latDeg.fill(999)
    expect(checkDocument(routeDocument, route).problems).toHaveLength(MOST_PROBLEMS)
  })

  test.each([[null], [[]], ['car'], [7], [{}]])('%j is no car, and the answer says so without a fault', (value) => {
    expect(checkDocument(carDocument, value).problems?.length).toBeGreaterThan(0)
  })

  test('names that live in every object are not taken for fields of the document', () => {
    const problems = problemsOf(carDocument, someCar(), set(['strings', 0, 'cellType'], 'constructor'))
    expect(problems[0]).toMatchObject({ field: 'strings[0].cellType', value: '"constructor"' })
  })
})
