import type { Chance } from './chance.ts'
import type { Mutated } from './json-mutation.ts'

type Edit = [what: string, text: string, isWrong: boolean]

const mutated = ([what, body, isWrong]: Edit): Mutated => ({ what, body, isWrong, names: null })

const ODD_ATTRIBUTES = ['', 'NaN', '91', '-90.5', '1e400', '-1e400', '12,5', '0x1F', ' 12', '１２', 'x'.repeat(9000)]
const ODD_HEIGHTS = ['NaN', '', 'high', '99999', '-9999', '1e400', '1200 m', '1,200', '<x/>', '&#0;', '&nope;']

/** A GPX file with one thing wrong in one point or in its frame. */
export function mutatedGpx(by: Chance, gpx: string): Mutated {
  const at = (pattern: RegExp, to: string): string => {
    const found = [...gpx.matchAll(pattern)]
    const { 0: text, index } = by.pick(found)
    return `${gpx.slice(0, index)}${text.replace(new RegExp(pattern.source), to)}${gpx.slice(index + text.length)}`
  }
  const attribute = by.pick(['lat', 'lon'])
  const odd = by.pick(ODD_ATTRIBUTES)
  const height = by.pick(ODD_HEIGHTS)
  const edits: Edit[] = [
    [`${attribute}="${odd.slice(0, 9)}"`, at(new RegExp(`${attribute}="[^"]*"`, 'g'), `${attribute}="${odd}"`), false],
    ['a latitude over 90', at(/lat="[^"]*"/g, 'lat="90.01"'), true],
    ['a longitude under -180', at(/lon="[^"]*"/g, 'lon="-180.01"'), true],
    [`no ${attribute}`, at(new RegExp(` ${attribute}="[^"]*"`, 'g'), ''), true],
    [`height ${height}`, at(/<ele>[^<]*</g, `<ele>${height}<`), false],
    ['lat and lon swapped', at(/lat="([^"]*)" lon="([^"]*)"/g, 'lat="$2" lon="$1"'), false],
    ['an attribute twice', at(/lat="[^"]*"/g, 'lat="1" lat="2"'), true],
    ['a tag left open', at(/<\/trkpt>/g, ''), true],
    ['a tag closed twice', at(/<\/trkpt>/g, '</trkpt></trkpt>'), true],
    ['a point far off', at(/lat="[^"]*"/g, 'lat="12.5"'), false],
    ['an unknown entity', at(/<ele>/g, '<ele>&nothing;'), true],
    ['a control character', at(/<name>/g, '<name>&#7;'), true],
    ['half a character', at(/<name>/g, '<name>&#xD83D;'), true],
    ['a name of 9,000 letters', at(/<name>/g, `<name>${'n'.repeat(9000)}`), false],
    ['other letters in a tag', at(/trkpt/g, 'Trkpt'), true],
  ]
  return mutated(by.pick(edits))
}

const BOMB =
  '<!DOCTYPE gpx [<!ENTITY a "aaaaaaaaaa"><!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;&a;&a;"><!ENTITY c "&b;&b;&b;&b;&b;&b;">]>'
const OUTSIDE = '<!DOCTYPE gpx [<!ENTITY x SYSTEM "file:///etc/hostname">]>'

/** A GPX file that means to harm, or another file altogether. */
export function hostileGpx(by: Chance, gpx: string): Mutated {
  const withType = (type: string, name: string) =>
    gpx.replace('<gpx', `${type}<gpx`).replace(/<name>[^<]*/, `<name>${name}`)
  return mutated(
    by.pick<Edit>([
      ['a document type', withType('<!DOCTYPE gpx>', 'x'), true],
      ['an entity bomb', withType(BOMB, '&c;'), true],
      ['an entity from outside', withType(OUTSIDE, '&x;'), true],
      ['nesting without end', gpx.replace('<trk>', '<a>'.repeat(20_000)), true],
      ['deep nesting, closed', gpx.replace('<trk>', `${'<a>'.repeat(500)}${'</a>'.repeat(500)}<trk>`), true],
      ['10,000 attributes', gpx.replace('<trk>', `<trk ${attributes(10_000)}>`), false],
      ['no points', gpx.replace(/<trkpt[\s\S]*<\/trkpt>/, ''), true],
      ['one point', gpx.replace(/(<\/trkpt>)[\s\S]*<\/trkpt>/, '$1'), true],
      ['another root', gpx.replaceAll('gpx', 'kml'), true],
      ['an older version', gpx.replace('version="1.1"', 'version="1.0"'), false],
      ['no namespace', gpx.replace(/ xmlns="[^"]*"/, ''), false],
      ['a page', '<!doctype html><html><body>Not found</body></html>', true],
      ['a comment left open', gpx.replace('<trk>', '<trk><!-- '), true],
      ['character data left open', gpx.replace('<trk>', '<trk><![CDATA['), true],
      ['a declared encoding that is not', gpx.replace('UTF-8', 'EBCDIC-CP-US'), false],
      ['a table instead', 'lat,lon\n1,2\n1,3\n', true],
    ]),
  )
}

const attributes = (n: number): string => Array.from({ length: n }, (_, i) => `a${i}="1"`).join(' ')

const ODD_CELLS = [
  '',
  'NaN',
  'Infinity',
  '1e400',
  '-',
  '∞',
  'abc',
  '"',
  '""',
  '=1+1',
  '９',
  '-9999',
  '91',
  '-500',
  '1e5',
  '1.2.3',
  '2026-02-30T08:00:00Z',
  '25:00',
  'null',
  '\u0000',
  '\u2028',
  "'",
  '1;2',
  '1,2',
  'x'.repeat(9000),
  '__proto__',
]

/** A table with one cell, row or column header changed. */
export function mutatedTable(by: Chance, csv: string, delimiter: string): Mutated {
  const rows = csv.trimEnd().split('\n')
  const row = 1 + by.below(rows.length - 1)
  const cells = rows[row].split(delimiter)
  const header = rows[0].split(delimiter)
  const [column, other] = [by.below(cells.length), by.below(cells.length)]
  // The first line of a typical year has fewer cells than its hours.
  const [name, twin] = [column % header.length, other % header.length]
  const odd = by.pick(ODD_CELLS)
  const table = (changed: string[]): string => `${changed.join('\n')}\n`
  const cellsOf = (changed: string[]): string => table(rows.with(row, changed.join(delimiter)))
  const headed = (changed: string[]): string => table(rows.with(0, changed.join(delimiter)))
  const cellEdit: Edit = [`row ${row}, cell ${column}: ${odd.slice(0, 20)}`, cellsOf(cells.with(column, odd)), false]
  const edits: Edit[] = [
    cellEdit,
    cellEdit,
    cellEdit,
    ['a header nobody knows', headed(header.with(name, 'mood')), false],
    ['no header', headed(header.with(name, '')), false],
    ['a header twice', headed(header.with(name, header[twin])), false],
    ['two headers swapped', headed(header.with(name, header[twin]).with(twin, header[name])), false],
    ['a cell too many', cellsOf([...cells, 'x']), false],
    ['a cell too few', cellsOf(cells.slice(1)), false],
    ['two cells swapped', cellsOf(cells.with(column, cells[other]).with(other, cells[column])), false],
    ['a row twice', table([...rows.slice(0, row), rows[row], ...rows.slice(row)]), false],
    ['a row taken out', table(rows.filter((_, i) => i !== row)), false],
    ['a quotation left open', cellsOf(cells.with(column, `"${cells[column]}`)), false],
    ['another delimiter in one row', cellsOf([cells.join('|')]), false],
  ]
  return mutated(by.pick(edits))
}

/** A table without its head, without its body, turned over, or no table. */
export function hostileTable(by: Chance, csv: string): Mutated {
  const rows = csv.trimEnd().split('\n')
  return mutated(
    by.pick<Edit>([
      ['no header row', rows.slice(1).join('\n'), true],
      ['only a header', `${rows[0]}\n`, true],
      ['one row', rows.slice(0, 2).join('\n'), true],
      ['rows turned over', [rows[0], ...rows.slice(1).toReversed()].join('\n'), false],
      ['old line ends', rows.join('\r'), false],
      ['blank lines', rows.join('\n\n\n'), false],
      ['3,000 columns', rows.map((row) => row + ',x'.repeat(3000)).join('\n'), false],
      ['one line of 200,000 letters', 'x,'.repeat(100_000), true],
      ['a page', '<!doctype html><html><body>Not found</body></html>', true],
      ['JSON', '{"name":"x"}', true],
      ['only delimiters', ',,,,\n,,,,\n,,,,\n', true],
      ['only quotation marks', '"'.repeat(4001), true],
    ]),
  )
}
