import Geodesic from 'geographiclib-geodesic'
import { describe, expect, it } from 'vitest'
import { MAX_FILE_BYTES } from '../../server/files/file-reading.ts'
import { readGpxRoute } from '../../server/files/gpx-route.ts'

/** Written by hand after the GPX 1.1 schema. @source www.topografix.com/GPX/1/1/gpx.xsd: gpxType, trkType, wptType */
const SALTPAN_LOOP = `<?xml version="1.0" encoding="UTF-8" standalone="no"?>
<gpx xmlns="http://www.topografix.com/GPX/1/1" xmlns:x="http://example.org/extension/1" version="1.1" creator="By hand"
     xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance"
     xsi:schemaLocation="http://www.topografix.com/GPX/1/1 http://www.topografix.com/GPX/1/1/gpx.xsd">
  <metadata>
    <name>Saltpan &amp; back</name>
    <time>2026-10-16T06:00:00Z</time>
    <bounds minlat="-31.06" minlon="21.00" maxlat="-31.00" maxlon="21.05"/>
  </metadata>
  <wpt lat="-31.0201" lon="21.0210"><ele>1190.0</ele><name>Windmill gate</name><sym>Flag</sym></wpt>
  <wpt lat="-30.5" lon="21.02"><name>Far away</name></wpt>
  <rte><name>Planned</name><rtept lat="-31" lon="21"/><rtept lat="-31.06" lon="21.05"/></rte>
  <trk>
    <name>Saltpan <![CDATA[<loop>]]></name>
    <extensions><x:trkpt lat="99" lon="999"/></extensions>
    <trkseg>
      <trkpt lat="-31.0000" lon="21.0000"><ele>1180.0</ele><time>2026-10-16T06:00:00Z</time></trkpt>
      <trkpt lat="-31.0100" lon="21.0100"><time>2026-10-16T06:01:00Z</time>
        <extensions><x:speed>17.2</x:speed><x:ele>-99999</x:ele></extensions></trkpt>
      <trkpt lat="-31.0200" lon="21.0200"><ele>1190.0</ele></trkpt>
    </trkseg>
    <trkseg/>
    <trkseg>
      <trkpt lat="-31.0200" lon="21.0200"><ele>1190.0</ele></trkpt>
      <trkpt lat="-31.0300" lon="21.0200"><ele>1200.0</ele></trkpt>
    </trkseg>
  </trk>
</gpx>
`

const gpx = (body: string, root = 'version="1.1" creator="t" xmlns="http://www.topografix.com/GPX/1/1"') =>
  `<?xml version="1.0"?>\n<gpx ${root}>\n${body}\n</gpx>\n`
const track = (points: string) => gpx(`<trk><trkseg>\n${points}\n</trkseg></trk>`)
const point = (lat: number | string, lon: number | string, inside = '') =>
  `<trkpt lat="${lat}" lon="${lon}">${inside}</trkpt>`
const points = (count: number, stepDeg = 0.001) =>
  Array.from({ length: count }, (_, i) => point((-31 + i * stepDeg).toFixed(5), 21)).join('\n')

function problemsOf(text: string) {
  const reading = readGpxRoute(text)
  if (reading.problems === undefined) throw new Error('expected problems, got a route')
  return reading.problems
}

function routeOf(text: string, name?: string) {
  const reading = readGpxRoute(text, { name })
  if (reading.problems !== undefined) throw new Error(JSON.stringify(reading.problems))
  return reading
}

describe('a GPX file as the schema wants it', () => {
  const { document, notices, summary } = routeOf(SALTPAN_LOOP)

  it('gives the track as the road, the repeated point dropped', () => {
    expect(document.points.latDeg).toEqual([-31, -31.01, -31.02, -31.03])
    expect(document.points.lonDeg).toEqual([21, 21.01, 21.02, 21.02])
    expect(summary.points).toBe(4)
  })
  it('is named by the track, markup in CDATA taken as text, or as the person wishes', () => {
    expect(document.name).toBe('Saltpan <loop>')
    expect(routeOf(SALTPAN_LOOP, 'Friday').document.name).toBe('Friday')
  })
  it('has the length that geographiclib finds', () => {
    const leg = (a: number, b: number, c: number, d: number) => Geodesic.Geodesic.WGS84.Inverse(a, b, c, d).s12 ?? 0
    const lengthM = leg(-31, 21, -31.01, 21.01) + leg(-31.01, 21.01, -31.02, 21.02) + leg(-31.02, 21.02, -31.03, 21.02)
    expect(summary.lengthKm * 1000).toBeCloseTo(lengthM, 3)
  })
  it('has the height that one point lacks filled along the road, and shows the climb', () => {
    expect(document.points.elevationM?.[1]).toBeCloseTo(1185, 1)
    expect(summary.climbBeforeM).toBeCloseTo(20, 6)
    expect(document.elevation?.climbBeforeM).toBe(summary.climbBeforeM)
    expect(document.elevation?.climbAfterM).toBe(summary.climbAfterM)
    expect(document.elevation?.method).toContain('spline')
  })
  it('brings a waypoint near the road to its place along it and leaves a far one out', () => {
    expect(summary.places).toHaveLength(1)
    expect(summary.places[0].name).toBe('Windmill gate')
    expect(summary.places[0].km).toBeCloseTo(2.938, 3)
    expect(summary.places[0].offsetM).toBeGreaterThan(50)
    expect(summary.places[0].offsetM).toBeLessThan(100)
  })
  it('says what it did on its own', () => {
    const said = notices.map((notice) => notice.detail).join('\n')
    expect(said).toContain('tracks are the road, the routes are left out')
    expect(said).toContain('2 segments')
    expect(said).toContain('1 repeated point')
    expect(said).toContain('1 of 4 points had no height')
    expect(said).toContain('1 waypoints left out')
    expect(said).not.toContain('gap')
  })
  it('has the box around it', () => {
    expect(summary.bounds).toEqual({ southDeg: -31.03, westDeg: 21, northDeg: -31, eastDeg: 21.02 })
  })
})

describe('a GPX file of another make', () => {
  it('gives a route where there is no track', () => {
    const reading = routeOf(gpx('<rte><name>Plan</name><rtept lat="1" lon="2"/><rtept lat="1.5" lon="2"/></rte>'))
    expect(reading.document.name).toBe('Plan')
    expect(reading.document.points.elevationM).toBeUndefined()
    expect(reading.document.elevation).toBeUndefined()
    expect(reading.summary.climbAfterM).toBeNull()
    expect(reading.notices[0].detail).toContain('no heights')
  })
  it('of version 1.0 is read with a word', () => {
    const root = 'version="1.0" creator="t" xmlns="http://www.topografix.com/GPX/1/0"'
    const reading = routeOf(gpx(`<trk><trkseg>${points(3)}</trkseg></trk>`, root))
    expect(reading.notices[0]).toMatchObject({ detail: 'GPX 1.0, read as GPX 1.1', line: 2 })
  })
  it('with a prefix on every element is read', () => {
    const text = track(points(3))
      .replace('xmlns=', 'xmlns:g=')
      .replace(/<(\/?)(gpx|trk|trkseg|trkpt)\b/g, '<$1g:$2')
    expect(routeOf(text).summary.points).toBe(3)
  })
  it('with two tracks joins them and names the gap and its line', () => {
    const two = gpx(
      `<trk><trkseg>\n${points(5)}</trkseg></trk>\n<trk><trkseg>${point(-30.98, 21)}\n${point(-30.979, 21)}</trkseg></trk>`,
    )
    const { notices, summary } = routeOf(two)
    expect(summary.points).toBe(7)
    expect(notices.map((n) => n.detail)).toContain('2 tracks, joined in the order of the file')
    expect(notices.find((n) => n.detail.startsWith('gap'))).toMatchObject({
      detail: 'gap of 1.77 km before this segment, bridged straight',
      line: 9,
    })
  })
  it('with legs of 60 km throughout passes as a sparse plan', () => {
    expect(routeOf(track(points(6, 0.54))).summary.lengthKm).toBeCloseTo(299.3, 0)
  })
  it('across the date line takes the short way and keeps its box narrow', () => {
    const { summary } = routeOf(track([point(-17, 179.99), point(-17, -179.99), point(-17, -179.97)].join('\n')))
    expect(summary.lengthKm).toBeCloseTo(4.26, 2)
    expect(summary.bounds).toMatchObject({ westDeg: 179.99, eastDeg: -179.97 })
  })
  it('out and back past a waypoint keeps the first pass', () => {
    const there = [0, 1, 2, 3].map((i) => point(-31 + i / 100, 21))
    const wpt = '<wpt lat="-30.99" lon="21"/>'
    const text = track([...there, there[2], there[1], there[0]].join('\n')).replace('<trk>', `${wpt}<trk>`)
    expect(routeOf(text).summary.places).toEqual([{ name: 'Waypoint 1', km: 1.109, offsetM: 0 }])
  })
})

describe('a GPX file that is wrong', () => {
  const CASES: { what: string; text: string; field: string; says: string; line: number; column?: number }[] = [
    { what: 'an empty file', text: '', field: 'document', says: 'well-formed', line: 1 },
    { what: 'no points', text: track(''), field: 'rtept', says: 'at least 2 points', line: 1 },
    { what: 'one point', text: track(points(1)), field: 'trkpt', says: 'at least 2 points', line: 4 },
    {
      what: 'one place many times',
      text: track(`${points(1)}\n`.repeat(9)),
      field: 'trkpt',
      says: 'different places',
      line: 4,
    },
    {
      what: 'a latitude left out',
      text: track(`${points(2)}\n<trkpt lon="21"/>`),
      field: 'trkpt lat',
      says: '-90 to 90',
      line: 6,
      column: 1,
    },
    {
      what: 'a latitude over the pole',
      text: track(`${points(2)}\n  ${point(90.01, 21)}`),
      field: 'trkpt lat',
      says: '-90 to 90',
      line: 6,
      column: 3,
    },
    {
      what: 'a longitude round twice',
      text: track(`${points(2)}\n${point(-31, 381)}`),
      field: 'trkpt lon',
      says: '-180 to 180',
      line: 6,
    },
    {
      what: 'a longitude in words',
      text: track(`${points(2)}\n${point(-31, '21E')}`),
      field: 'trkpt lon',
      says: '-180 to 180',
      line: 6,
    },
    {
      what: 'a height in feet with the unit',
      text: track(`${points(2)}\n${point(-30.99, 21, '<ele>400 ft</ele>')}`),
      field: 'trkpt ele',
      says: 'height',
      line: 6,
    },
    {
      what: 'a height over the sky',
      text: track(`${points(2)}\n${point(-30.99, 21, '<ele>9001</ele>')}`),
      field: 'trkpt ele',
      says: 'height',
      line: 6,
    },
    {
      what: 'a waypoint without longitude',
      text: gpx(`<wpt lat="1"/><trk><trkseg>${points(2)}</trkseg></trk>`),
      field: 'wpt lon',
      says: '-180 to 180',
      line: 3,
    },
    {
      what: 'a jump',
      text: track(`${points(20)}\n${point(-29, 21)}\n${point(-28.999, 21)}`),
      field: 'trkpt',
      says: 'jump',
      line: 24,
    },
    { what: 'a file cut short', text: track(points(9)).slice(0, 400), field: 'trkseg', says: 'cut short', line: 11 },
    { what: 'another root', text: '<kml><a/></kml>', field: 'kml', says: 'expected gpx', line: 1, column: 1 },
    { what: 'no namespace', text: gpx(points(2), 'version="1.1"'), field: 'gpx xmlns', says: 'GPX/1/1', line: 2 },
    {
      what: 'a DOCTYPE',
      text: '<?xml version="1.0"?>\n<!DOCTYPE gpx>\n<gpx/>',
      field: 'DOCTYPE',
      says: 'refused',
      line: 2,
    },
    {
      what: 'an entity of its own',
      text: track(`${points(2)}\n${point(-30, 21, '<name>&boom;</name>')}`),
      field: 'document',
      says: 'undefined entity',
      line: 6,
    },
    {
      what: 'tags that cross',
      text: track('<trkpt lat="1" lon="2"><ele></trkpt></ele>'),
      field: 'document',
      says: 'well-formed',
      line: 4,
    },
    { what: 'a table', text: 'lat,lon\n1,2\n', field: 'document', says: 'well-formed', line: 3 },
  ]
  it.each(CASES)('is refused by name and line: $what', ({ text, field, says, line, column }) => {
    const [problem] = problemsOf(text)
    expect(problem).toMatchObject({ field, line, ...(column !== undefined && { column }) })
    expect(problem.detail).toContain(says)
  })

  it('is refused for an entity bomb in no time', () => {
    const bomb = `<?xml version="1.0"?>\n<!DOCTYPE gpx [<!ENTITY a "ha">${'<!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;">'.repeat(50)}]>\n${gpx('&b;')}`
    const from = performance.now()
    expect(problemsOf(bomb)[0].field).toBe('DOCTYPE')
    expect(performance.now() - from).toBeLessThan(5000)
  })
  it('is refused for a hundred thousand elements inside each other', () => {
    const [problem] = problemsOf(gpx('<a>'.repeat(100_000)))
    expect(problem).toMatchObject({ field: 'a', line: 3, column: 1 + 63 * 3 })
    expect(problem.detail).toContain('at most 64')
  })
  it('is refused over the limit before it is read', () => {
    expect(problemsOf(' '.repeat(MAX_FILE_BYTES + 1))[0].detail).toContain('at most 20.0 MB')
  })
  it('is refused for its point number 100,001', () => {
    const [problem, ...more] = problemsOf(track(points(100_003, 0.0001)))
    expect(problem).toMatchObject({ value: 'point 100001', line: 100_004 })
    expect(more).toHaveLength(0)
  })
  it('names every wrong point up to a hundred, and then how many more', () => {
    const bad = Array.from({ length: 130 }, (_, i) => point(91, i)).join('\n')
    const problems = problemsOf(track(bad))
    expect(problems).toHaveLength(101)
    expect(problems.slice(0, 100).map((p) => p.line)).toEqual(Array.from({ length: 100 }, (_, i) => i + 4))
    expect(problems[100]).toMatchObject({ field: 'file', detail: 'and 30 more problems', line: 133 })
  })
})

describe('a day on the road, 50,000 points', () => {
  const road = (points: number): string =>
    track(
      Array.from({ length: points }, (_, i) => {
        const ele = 1200 + 80 * Math.sin(i / 400) + ((i * 7919) % 100) / 25
        return point(
          (-31 + i * 0.0001).toFixed(6),
          (21 + 0.01 * Math.sin(i / 900)).toFixed(6),
          `<ele>${ele.toFixed(1)}</ele><time>2026-10-17T06:00:00Z</time>`,
        )
      }).join('\n'),
    )

  /** Computing time, the least of three: other work on the machine is not this reader's. [ms] */
  function computingMs(points: number): number {
    const text = road(points)
    const runsMs = [1, 2, 3].map(() => {
      const from = process.cpuUsage()
      expect(routeOf(text).summary.points).toBe(points)
      return process.cpuUsage(from).user / 1000
    })
    return Math.min(...runsMs)
  }

  it('takes about four times as long as a quarter of it, not sixteen times', { timeout: 120_000 }, () => {
    const [quarterMs, wholeMs] = [12_500, 50_000].map(computingMs)
    console.log(`50,000 points: ${wholeMs.toFixed(0)} ms, 12,500: ${quarterMs.toFixed(0)} ms`)
    expect(wholeMs / quarterMs).toBeLessThan(9)
  })
})
