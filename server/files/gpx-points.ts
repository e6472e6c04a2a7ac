import { shownValue } from '../documents/problem.ts'
import type { Notice, ProblemList } from './file-reading.ts'
import { attributeOf, walkXml } from './safe-xml.ts'
import type { XmlElement, XmlPlace } from './safe-xml.ts'
import { addPoint, emptyTrace } from './trace.ts'
import type { Trace } from './trace.ts'

/** Namespaces of GPX. @source www.topografix.com/GPX/1/1/gpx.xsd and /GPX/1/0/gpx.xsd, targetNamespace */
const GPX_1_1 = 'http://www.topografix.com/GPX/1/1'
const GPX_1_0 = 'http://www.topografix.com/GPX/1/0'

export interface Waypoint {
  name: string
  latDeg: number
  lonDeg: number
}

/** A line of points of the file: a trkseg or a rte, with the index of its first point. */
export interface Segment {
  first: number
  /** Which trk or rte it belongs to, from 1. */
  parent: number
  line: number
}

export interface GpxLine {
  trace: Trace
  segments: Segment[]
  parents: number
  name?: string
}

export interface GpxContent {
  name?: string
  track: GpxLine
  route: GpxLine
  waypoints: Waypoint[]
  notices: Notice[]
}

interface Point {
  tag: string
  latDeg: number
  lonDeg: number
  elevationM: number
  name: string
}

const emptyLine = (): GpxLine => ({ trace: emptyTrace(), segments: [], parents: 0 })

/** All that a GPX text says of places: its tracks, routes and waypoints; what is wrong goes to the problems. */
export function gpxPoints(text: string, problems: ProblemList): GpxContent {
  const content: GpxContent = { track: emptyLine(), route: emptyLine(), waypoints: [], notices: [] }
  const { track, route } = content
  let point: Point = blankPoint('', Number.NaN, Number.NaN)

  const startSegment = (line: GpxLine, place: XmlPlace) =>
    line.segments.push({ first: line.trace.latDeg.length, parent: line.parents, line: place.line })
  const startPoint = (tag: string, element: XmlElement) => {
    point = blankPoint(tag, degrees(element, tag, 'lat', 90, problems), degrees(element, tag, 'lon', 180, problems))
  }
  const endPoint = (line: GpxLine, place: XmlPlace) => {
    const { latDeg, lonDeg, elevationM } = point
    if (!Number.isNaN(latDeg + lonDeg))
      addPoint(line.trace, [latDeg, lonDeg, elevationM, place.line, place.column], point.tag, problems)
  }
  const height = (said: string, place: XmlPlace) => {
    point.elevationM = numberWithin(said, [-500, 9000])
    if (said.trim() !== '' && Number.isNaN(point.elevationM))
      problems.add(wrong(`${point.tag} ele`, said, 'a height from -500 to 9000 m', place))
  }

  const onOpen: Record<string, (element: XmlElement) => void> = {
    gpx: (element) => checkNamespace(element, content, problems),
    'gpx/trk': () => void track.parents++,
    'gpx/trk/trkseg': (element) => startSegment(track, element.place),
    'gpx/trk/trkseg/trkpt': (element) => startPoint('trkpt', element),
    'gpx/rte': (element) => {
      route.parents++
      startSegment(route, element.place)
    },
    'gpx/rte/rtept': (element) => startPoint('rtept', element),
    'gpx/wpt': (element) => startPoint('wpt', element),
  }
  const onClose: Record<string, (text: string, place: XmlPlace) => void> = {
    'gpx/name': (said) => void (content.name ??= said),
    'gpx/metadata/name': (said) => void (content.name ??= said),
    'gpx/trk/name': (said) => void (track.name ??= said),
    'gpx/rte/name': (said) => void (route.name ??= said),
    'gpx/wpt/name': (said) => void (point.name = said),
    'gpx/trk/trkseg/trkpt/ele': height,
    'gpx/rte/rtept/ele': height,
    'gpx/trk/trkseg/trkpt': (_, place) => endPoint(track, place),
    'gpx/rte/rtept': (_, place) => endPoint(route, place),
    'gpx/wpt': () => void content.waypoints.push({ name: point.name, latDeg: point.latDeg, lonDeg: point.lonDeg }),
  }
  const listener = {
    open: (element: XmlElement) => handler(onOpen, element.path)?.(element),
    close: (path: string, said: string, place: XmlPlace) => handler(onClose, path)?.(said, place),
  }
  walkXml(text, 'gpx', listener, problems)
  return content
}

const handler = <T>(handlers: Record<string, T>, path: string): T | undefined =>
  Object.hasOwn(handlers, path) ? handlers[path] : undefined

const blankPoint = (tag: string, latDeg: number, lonDeg: number): Point => ({
  tag,
  latDeg,
  lonDeg,
  elevationM: Number.NaN,
  name: '',
})

function checkNamespace(element: XmlElement, content: GpxContent, problems: ProblemList): void {
  if (element.namespace === GPX_1_1) return
  if (element.namespace === GPX_1_0) content.notices.push({ detail: 'GPX 1.0, read as GPX 1.1', ...element.place })
  else problems.add(wrong('gpx xmlns', element.namespace, `the namespace ${GPX_1_1}`, element.place))
}

function degrees(element: XmlElement, tag: string, name: string, most: number, problems: ProblemList): number {
  const said = attributeOf(element, name)
  const value = numberWithin(said ?? '', [-most, most])
  if (Number.isNaN(value))
    problems.add(wrong(`${tag} ${name}`, said, `degrees from -${most} to ${most}`, element.place))
  return value
}

const wrong = (field: string, said: string | undefined, expected: string, place: XmlPlace) => ({
  field,
  ...(said !== undefined && { value: shownValue(said) }),
  detail: `expected ${expected}`,
  ...place,
})

/** A decimal number in a closed range, or NaN. */
function numberWithin(said: string, [min, max]: [number, number]): number {
  const text = said.trim()
  if (!/^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/.test(text)) return Number.NaN
  const value = Number(text)
  return value >= min && value <= max ? value : Number.NaN
}
