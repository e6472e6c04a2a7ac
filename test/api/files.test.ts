import { gzipSync } from 'node:zlib'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { referenceText } from '../support/reference.ts'
import { type Service, startService } from './service.ts'

let service: Service
beforeAll(async () => {
  service = await startService()
})
afterAll(() => service.close())

const GPX = `<?xml version="1.0"?>
<gpx version="1.1" creator="Weaverbird" xmlns="http://www.topografix.com/GPX/1/1">
<trk><name>Saltpan loop</name><trkseg>
<trkpt lat="-23.10" lon="16.22"><ele>1240</ele></trkpt>
<trkpt lat="-23.09" lon="16.23"><ele>1245</ele></trkpt>
<trkpt lat="-23.08" lon="16.25"><ele>1250</ele></trkpt>
</trkseg></trk></gpx>
`
const BAD_GPX = GPX.replace('lat="-23.09"', 'lat="-123.09"')

const ROUTE_CSV = 'latitude;longitude;elevation (m)\n-23,10;16,22;1240\n-23,09;16,23;1245\n-23,08;16,25;1250\n'

const SKY_CSV = `time,GHI (W/m2),air temperature (°C)
2026-10-17 08:00,200,18
2026-10-17 09:00,460,21
2026-10-17 10:00,700,24
`
const SKY_QUERY =
  'name=Saltpan&source=forecast&issuedAt=2026-10-16T18:00:00+02:00&utcOffset=+02:00&averaging=preceding&place=Saltpan&lat=-23.1&lon=16.22&elevationM=1240'

const send = (method: 'PUT' | 'POST', url: string, type: string, payload: string | Buffer) =>
  service.ask({ method, url, headers: { 'content-type': type }, payload })

describe('a route file', () => {
  test.each([
    ['application/gpx+xml', GPX],
    ['application/xml', GPX],
    ['text/xml; charset=utf-8', GPX],
    ['text/csv', ROUTE_CSV],
  ])('as %s is shown before it is saved', async (type, file) => {
    const answer = await send('POST', '/api/v1/routes/read?name=Loop', type, file)
    expect(answer.statusCode).toBe(200)
    const { document, summary } = answer.json()
    expect(document).toMatchObject({ name: 'Loop', points: { latDeg: [-23.1, -23.09, -23.08] } })
    expect(summary).toMatchObject({ points: 3 })
    expect((await service.ask({ url: '/api/v1/routes' })).json().items).toEqual([])
  })

  test('is saved with what was found in it, and comes back as the document that was shown', async () => {
    const shown = (await send('POST', '/api/v1/routes/read', 'application/gpx+xml', GPX)).json()
    const saved = await send('PUT', '/api/v1/routes/loop', 'application/gpx+xml', GPX)
    expect(saved.statusCode).toBe(201)
    expect(saved.json()).toMatchObject({
      name: 'Saltpan loop',
      version: 1,
      notices: shown.notices,
      summary: shown.summary,
    })
    expect((await service.ask({ url: '/api/v1/routes/loop' })).json().document).toEqual(shown.document)
    await service.ask({ method: 'DELETE', url: '/api/v1/routes/loop', headers: { 'if-match': '"1"' } })
  })

  test('with a wrong latitude is refused by line and column, nothing is saved', async () => {
    for (const [method, url] of [
      ['POST', '/api/v1/routes/read'],
      ['PUT', '/api/v1/routes/wrong'],
    ] as const) {
      const answer = await send(method, url, 'application/gpx+xml', BAD_GPX)
      expect(answer.statusCode).toBe(422)
      expect(answer.json()).toMatchObject({
        code: 'invalid-file',
        errors: [{ line: 5, value: expect.stringContaining('-123.09') }],
      })
    }
    expect((await service.ask({ url: '/api/v1/routes/wrong' })).statusCode).toBe(404)
  })

  test('may say more about its columns', async () => {
    const file = 'Breite,Laenge\n-23.10,16.22\n-23.09,16.23\n'
    const options = encodeURIComponent(JSON.stringify({ columns: { latDeg: 'Breite', lonDeg: 'Laenge' } }))
    expect((await send('POST', '/api/v1/routes/read', 'text/csv', file)).statusCode).toBe(422)
    expect((await send('POST', `/api/v1/routes/read?options=${options}`, 'text/csv', file)).statusCode).toBe(200)
  })
})

describe('a weather table', () => {
  test('is read with the options of the query, where + stands for itself', async () => {
    const answer = await send('PUT', `/api/v1/skies/saltpan?${SKY_QUERY}`, 'text/csv', SKY_CSV)
    expect(answer.json()).toMatchObject({ name: 'Saltpan', version: 1 })
    const { document } = (await service.ask({ url: '/api/v1/skies/saltpan' })).json()
    expect(document).toMatchObject({
      issuedAt: '2026-10-16T18:00:00+02:00',
      places: [{ name: 'Saltpan', latDeg: -23.1, lonDeg: 16.22, elevationM: 1240, ghiWm2: [200, 460, 700] }],
    })
    expect(Date.parse(document.places[0].at[0])).toBe(Date.UTC(2026, 9, 17, 6))
    expect(document.averaging.ghiWm2).toBe('preceding')
  })

  test.each([
    ['lat=-91', 'lat'],
    ['lat=-23.1', 'lon'],
    ['averaging=always', 'averaging'],
    ['issuedAt=yesterday', 'issuedAt'],
    ['options=[1]', 'options'],
    ['options={"colour":"blue"}', 'colour'],
    ['colour=blue', 'colour'],
    ['', 'issuedAt'],
  ])('with ?%s is refused, naming %s', async (query, field) => {
    const answer = await send('POST', `/api/v1/skies/read?${encodeURI(query)}`, 'text/csv', SKY_CSV)
    expect(answer.json()).toMatchObject({ status: 400, code: 'bad-query' })
    expect(answer.json().errors).toContainEqual(expect.objectContaining({ field }))
  })
})

describe('a typical year', () => {
  const TMY3 = referenceText('723170TYA.CSV')
  const EPW = [
    'LOCATION,Saltpan,-,XXX,invented,0,-23.1,16.22,2,1240',
    'DESIGN CONDITIONS,0',
    'TYPICAL/EXTREME PERIODS,0',
    'GROUND TEMPERATURES,0',
    'HOLIDAYS/DAYLIGHT SAVINGS,No,0,0,0',
    'COMMENTS 1',
    'COMMENTS 2',
    'DATA PERIODS,1,1,Data,Sunday,1/1,12/31',
    ...Array.from(
      { length: 24 },
      (_, i) => `1999,10,17,${i + 1},60,A,20,5,30,88000,0,0,0,${i > 6 && i < 18 ? 500 : 0},9999,9999,0,0,0,0,90,3,2`,
    ),
  ].join('\n')

  test('as TMY3 gives the days asked for', async () => {
    const answer = await send(
      'POST',
      '/api/v1/skies/read?fileKind=tmy3&from=2026-10-16&to=2026-10-17',
      'text/csv',
      TMY3,
    )
    expect(answer.statusCode).toBe(200)
    const { document, summary } = answer.json()
    expect(document).toMatchObject({ source: 'typical', places: [{ latDeg: 36.1 }] })
    expect(summary).toMatchObject({ from: '2026-10-16T01:00:00-05:00', to: '2026-10-18T00:00:00-05:00' })
  })

  test('as EPW is saved and comes back', async () => {
    const query = 'fileKind=epw&from=2026-10-17&to=2026-10-17&name=Typical'
    const answer = await send('PUT', `/api/v1/skies/typical?${query}`, 'text/csv', EPW)
    expect(answer.json()).toMatchObject({ name: 'Typical', version: 1 })
    const { document } = (await service.ask({ url: '/api/v1/skies/typical' })).json()
    expect(document.places[0].ghiWm2).toHaveLength(24)
    expect(document.source).toBe('typical')
  })

  test.each([
    ['fileKind=epw', 'from'],
    ['fileKind=epw&from=2026-10-17&to=2026-10-16', 'to'],
    ['fileKind=epw&from=2026-10-17&to=17', 'to'],
    ['fileKind=epw&from=2026-10-17&to=2026-10-17&averaging=preceding', 'averaging'],
    ['fileKind=grib', 'fileKind'],
    ['from=2026-10-17', 'from'],
  ])('with ?%s is refused, naming %s', async (query, field) => {
    const answer = await send('POST', `/api/v1/skies/read?${query}`, 'text/csv', EPW)
    expect(answer.json()).toMatchObject({ status: 400, code: 'bad-query' })
    expect(answer.json().errors).toContainEqual(expect.objectContaining({ field }))
  })

  test('sent as another kind is refused in words', async () => {
    const answer = await send('POST', `/api/v1/skies/read?${SKY_QUERY}`, 'text/csv', EPW)
    expect(answer.json()).toMatchObject({ status: 422, code: 'invalid-file', errors: [{ field: 'file', line: 1 }] })
    expect(answer.json().errors[0].detail).toContain('this is an EPW weather file')
  })
})

describe('a body', () => {
  test('of a kind that is not read here is refused with the kinds that are', async () => {
    for (const [url, type, known] of [
      ['/api/v1/cars/x', 'application/gpx+xml', 'application/json'],
      ['/api/v1/routes/x', 'application/pdf', 'application/gpx+xml'],
      ['/api/v1/skies/x', 'multipart/form-data; boundary=x', 'text/csv'],
    ]) {
      const answer = await send('PUT', url, type, 'x')
      expect(answer.json()).toMatchObject({
        status: 415,
        code: 'unsupported-media-type',
        errors: [{ field: 'Content-Type' }],
      })
      expect(answer.headers.accept).toContain(known)
    }
  })

  test('without a Content-Type is refused', async () => {
    const answer = await service.ask({ method: 'PUT', url: '/api/v1/cars/x' })
    expect(answer.json()).toMatchObject({ status: 415, code: 'unsupported-media-type' })
  })

  test('that is empty is refused', async () => {
    const answer = await send('POST', '/api/v1/routes/read', 'text/csv', '')
    expect(answer.json()).toMatchObject({ status: 400, code: 'empty-body' })
  })

  test('as JSON takes no options', async () => {
    const answer = await send('PUT', '/api/v1/routes/x?name=Loop', 'application/json', '{}')
    expect(answer.json()).toMatchObject({ status: 400, code: 'bad-query', errors: [{ field: 'name' }] })
  })

  test('over the limit is refused, unpacked or packed', async () => {
    const large = Buffer.alloc(24_000_001, ' ')
    expect((await send('PUT', '/api/v1/cars/x', 'application/json', large)).json()).toMatchObject({
      status: 413,
      code: 'too-large',
    })
    const packed = await service.ask({
      method: 'PUT',
      url: '/api/v1/cars/x',
      headers: { 'content-type': 'application/json', 'content-encoding': 'gzip' },
      payload: gzipSync(large),
    })
    expect(packed.statusCode).toBeGreaterThanOrEqual(400)
    expect(packed.statusCode).toBeLessThan(500)
    const speeds = await send('POST', '/api/v1/races/x/forecasts', 'application/json', Buffer.alloc(1_000_001, ' '))
    expect(speeds.json()).toMatchObject({ status: 413, code: 'too-large' })
  })
})
