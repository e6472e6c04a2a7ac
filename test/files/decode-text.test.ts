import { describe, expect, it } from 'vitest'
import { decodeText, looksLike } from '../../server/files/decode-text.ts'
import { MAX_FILE_BYTES } from '../../server/files/file-reading.ts'

const bytesOf = (text: string, encoding: BufferEncoding) => new Uint8Array(Buffer.from(text, encoding))
const swapped = (bytes: Uint8Array) => bytes.map((_, i) => bytes[i ^ 1])

describe('the bytes of a file', () => {
  const text = 'lat,lon\n1,2\nStraße,€\n'
  it.each([
    { what: 'UTF-8', bytes: bytesOf(text, 'utf8') },
    { what: 'UTF-8 with a mark', bytes: bytesOf(`\uFEFF${text}`, 'utf8') },
    { what: 'UTF-16 with a mark', bytes: bytesOf(`\uFEFF${text}`, 'utf16le') },
    { what: 'UTF-16 without one', bytes: bytesOf(text, 'utf16le') },
    { what: 'UTF-16 the other way round', bytes: swapped(bytesOf(`\uFEFF${text}`, 'utf16le')) },
    { what: 'UTF-16 the other way round without a mark', bytes: swapped(bytesOf(text, 'utf16le')) },
  ])('are read as $what', ({ bytes }) => expect(decodeText(bytes)).toEqual({ text }))

  it('that are Latin-1 are refused at the first such letter', () => {
    expect(decodeText(bytesOf('lat,lon\n1,2\nStraße,3', 'latin1')).problems).toMatchObject([
      { field: 'file', value: 'byte 0xdf', line: 3, column: 5 },
    ])
  })
  it('that stop within a letter are refused at the end', () => {
    expect(decodeText(bytesOf('1,2\nab€', 'utf8').subarray(0, 7)).problems).toMatchObject([{ line: 2, column: 3 }])
  })
  it('over 20 MB are refused by size', () => {
    const [problem] = decodeText(new Uint8Array(MAX_FILE_BYTES + 1)).problems ?? []
    expect(problem.detail).toBe('expected a file of at most 20.0 MB')
    expect(decodeText(new Uint8Array(MAX_FILE_BYTES).fill(65)).problems).toBeUndefined()
  })
  it('that are none give an empty text', () => expect(decodeText(new Uint8Array())).toEqual({ text: '' }))
})

describe('the kind of a file', () => {
  it.each([
    ['gpx', '<?xml version="1.0"?>\n<!-- c --><gpx version="1.1">'],
    ['gpx', '\uFEFF  <g:gpx xmlns:g="x"/>'],
    ['csv', '# note\nlat;lon\n1;2'],
    ['csv', 'a\tb'],
    ['unknown', '<kml xmlns="x"><gpxish/></kml>'],
    ['unknown', 'nothing here'],
    ['unknown', ''],
  ])('is %s by its content: %j', (kind, text) => expect(looksLike(text)).toBe(kind))
})
