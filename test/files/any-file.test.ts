import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { readCsvRoute } from '../../server/files/csv-route.ts'
import { readCsvSky } from '../../server/files/csv-sky.ts'
import { decodeText } from '../../server/files/decode-text.ts'
import { readEpwSky } from '../../server/files/epw-sky.ts'
import { readGpxRoute } from '../../server/files/gpx-route.ts'
import { readTmy3Sky } from '../../server/files/tmy3-sky.ts'

const GPX = `<?xml version="1.0" encoding="UTF-8"?>
<gpx version="1.1" creator="t" xmlns="http://www.topografix.com/GPX/1/1">
<wpt lat="-31.01" lon="21.0"><name>Gate</name></wpt>
<trk><name>Loop &amp; more</name><trkseg>
<trkpt lat="-31.00" lon="21.00"><ele>1180.5</ele></trkpt>
<trkpt lat="-31.01" lon="21.00"><ele>1185.5</ele></trkpt>
</trkseg><trkseg>
<trkpt lat="-31.02" lon="21.01"><ele>1190</ele></trkpt>
<trkpt lat="-31.03" lon="21.01"/>
</trkseg></trk></gpx>
`
const ROUTE =
  'lat;lon;elev (ft);speed limit (mph);surface\n-31,00;21,00;3900;60;1\n-31,01;21,00;3910;60;\n"-31,02";21,01;3920;45;1,2\n'
const SKY = `place,lat,lon,elevation (m),time (UTC+2),"GHI (W/m2, preceding hour)",cloud [oktas; instant],temp (°C),wind (kn),wind from
Saltpan,-31,21,1180,2026-10-17 06:00,10,3,12,5,NNW
Saltpan,-31,21,1180,2026-10-17 07:00,120,NA,14,6,200
Twin Wells,-30,21,1300,2026-10-17 06:00,12,,11,7,calm
Twin Wells,-30,21,1300,2026-10-17 07:00,130,8,13,-9999,10
`
const SKY_OPTIONS = { name: 'T', source: 'forecast', issuedAt: '2026-10-16T18:00:00Z' } as const

const HOURS = Array.from({ length: 24 }, (_, i) => i + 1)
const EPW = `LOCATION,Saltpan,-,XXX,invented,0,-31,21,2,1180
DESIGN CONDITIONS,0
TYPICAL/EXTREME PERIODS,0
GROUND TEMPERATURES,0
HOLIDAYS/DAYLIGHT SAVINGS,No,0,0,0
COMMENTS 1,"invented
COMMENTS 2
DATA PERIODS,1,1,Data,Sunday,1/1,12/31
${HOURS.map((h) => `1997,10,17,${h},60,A,${h},5,40,88000,0,0,0,${h * 20},9999,9999,0,0,0,0,${h * 15},3,2,2`).join('\n')}
`
const TMY3 = `1,"SALTPAN, OLD ROAD",XX,2.0,-31,21,1180
Date (MM/DD/YYYY),Time (HH:MM),GHI (W/m^2),DNI (W/m^2),DHI (W/m^2),TotCld (tenths),Dry-bulb (C),Dew-point (C),RHum (%),Pressure (mbar),Wdir (degrees),Wspd (m/s)
${HOURS.map((h) => `10/17/1997,${String(h).padStart(2, '0')}:00,${h * 20},-9900,-9900,4,${h},5,40,880,${h * 15},3`).join('\n')}
`
const DAY = { from: '2026-10-17', to: '2026-10-17' }

const DOORS = [
  { name: 'GPX', text: GPX, read: (text: string) => readGpxRoute(text) },
  { name: 'road table', text: ROUTE, read: (text: string) => readCsvRoute(text) },
  { name: 'weather table', text: SKY, read: (text: string) => readCsvSky(text, SKY_OPTIONS) },
  { name: 'EPW', text: EPW, read: (text: string) => readEpwSky(text, DAY) },
  { name: 'TMY3', text: TMY3, read: (text: string) => readTmy3Sky(text, DAY) },
]

/** One or two edits: a byte set, put in or taken out, or the file cut short. */
const edit = fc.record({
  kind: fc.constantFrom('set', 'set', 'set', 'in', 'in', 'out', 'out', 'out', 'cut'),
  at: fc.noBias(fc.nat(99_999)),
  byte: fc.oneof(
    fc.integer({ min: 0, max: 255 }),
    fc.constantFrom(...Buffer.from('0123456789')),
    fc.constantFrom(...Buffer.from('<>&"\',;.-09\n\r\tNe')),
  ),
})

function edited(bytes: Uint8Array, { kind, at, byte }: { kind: string; at: number; byte: number }): Uint8Array {
  const i = at % bytes.length
  if (kind === 'cut') return bytes.slice(0, i)
  const middle = kind === 'out' ? [] : [byte]
  return Uint8Array.from([...bytes.slice(0, i), ...middle, ...bytes.slice(kind === 'in' ? i : i + 1)])
}

/** No number of a document may be other than finite. */
function numbersIn(value: unknown): number[] {
  if (typeof value === 'number') return [value]
  return value !== null && typeof value === 'object' ? Object.values(value).flatMap(numbersIn) : []
}

describe.each(DOORS)('a $name file with a few wrong bytes', ({ text, read }) => {
  it('gives a whole document or problems with lines that exist, and never throws', () => {
    const counts = { read: 0, refused: 0 }
    fc.assert(
      fc.property(fc.array(edit, { minLength: 1, maxLength: 2 }), (edits) => {
        const bytes = edits.reduce(edited, new Uint8Array(Buffer.from(text)))
        const decoded = decodeText(bytes)
        const reading = decoded.text === undefined ? decoded : read(decoded.text)
        if (reading.problems === undefined) {
          counts.read++
          expect(numbersIn([reading.document, reading.summary]).every(Number.isFinite)).toBe(true)
          return
        }
        counts.refused++
        const lines = (decoded.text ?? Buffer.from(bytes).toString('latin1')).split(/\r\n|\r|\n/).length
        expect(reading.problems.length).toBeGreaterThan(0)
        for (const { field, detail, line, column = 1 } of reading.problems) {
          expect(field).not.toBe('')
          expect(detail.length).toBeGreaterThan(10)
          expect(line).toBeGreaterThanOrEqual(1)
          expect(line).toBeLessThanOrEqual(lines)
          expect(column).toBeGreaterThanOrEqual(1)
        }
      }),
      { numRuns: 1500, seed: 7 },
    )
    expect(counts.read + counts.refused).toBe(1500)
    expect(Math.min(counts.read, counts.refused)).toBeGreaterThan(100)
  })
  it('is read when nothing is wrong', () => expect(read(text).problems).toBeUndefined())
})
