import { SaxesParser } from 'saxes'
import type { SaxesAttributeNS } from 'saxes'
import { shownValue } from '../documents/problem.ts'
import type { ProblemList } from './file-reading.ts'

const DEEPEST = 64
const MOST_ATTRIBUTES = 100
/** Small, so that little more is parsed once the walk is over. [characters] */
const CHUNK = 8192

export interface XmlPlace {
  line: number
  column: number
}

export interface XmlElement {
  /** Local names from the root down in the root's namespace; elements of other namespaces have a leading '?'. */
  path: string
  namespace: string
  attributes: Readonly<Record<string, SaxesAttributeNS>>
  place: XmlPlace
}

export interface XmlListener {
  open(element: XmlElement): void
  /** The element's own text, without that of its children. */
  close(path: string, text: string, place: XmlPlace): void
}

/**
 * Walks an XML text and tells the listener of each element. A DOCTYPE, more than 64 elements inside each other, a
 * root of another name and text that is not well formed or ends early are problems, and the walk ends there.
 */
export function walkXml(text: string, root: string, listener: XmlListener, problems: ProblemList): void {
  const parser = new SaxesParser({ xmlns: true, position: true })
  const top: PathNode = { path: '', inner: new Map() }
  const open: { at: PathNode; place: XmlPlace; text: string }[] = []
  let rootUri = ''
  let isOver = false
  let attributes = 0
  let start: XmlPlace = { line: 1, column: 1 }
  const here = (): XmlPlace => ({ line: parser.line, column: Math.max(parser.column, 1) })
  const stop = (field: string, detail: string, place: XmlPlace) => {
    if (!isOver) problems.add({ field, detail, ...place })
    isOver = true
  }
  const addText = (said: string) => {
    if (!isOver && open.length > 0) open[open.length - 1].text += said
  }

  parser.on('doctype', () => stop('DOCTYPE', 'expected none: document types and their entities are refused', here()))
  parser.on('error', (error) => {
    const unclosed = /unclosed tag: (\S+)/.exec(error.message)
    if (unclosed === null) return stop('document', `expected well-formed XML: ${withoutPlace(error.message)}`, here())
    stop(unclosed[1], `expected </${unclosed[1]}>, but the file ends: it was cut short`, here())
  })
  parser.on('opentagstart', (tag) => {
    attributes = 0
    start = { line: parser.line, column: Math.max(parser.column - tag.name.length - 1, 1) }
  })
  parser.on('attribute', () => {
    if (++attributes > MOST_ATTRIBUTES)
      stop('document', `expected at most ${MOST_ATTRIBUTES} attributes of an element`, start)
  })
  parser.on('text', addText)
  parser.on('cdata', addText)
  parser.on('opentag', (tag) => {
    if (isOver) return
    if (open.length === 0) {
      rootUri = tag.uri
      if (tag.local !== root) return stop(shortName(tag.name), `expected ${root} as the outermost element`, start)
    }
    if (open.length >= DEEPEST)
      return stop(shortName(tag.name), `expected at most ${DEEPEST} elements inside each other`, start)
    const name = tag.uri === rootUri ? tag.local : `?${tag.name}`
    const at = step(open.length === 0 ? top : open[open.length - 1].at, name)
    open.push({ at, place: start, text: '' })
    listener.open({ path: at.path, namespace: tag.uri, attributes: tag.attributes, place: start })
  })
  parser.on('closetag', () => {
    const closed = open.pop()
    if (!isOver && closed !== undefined) listener.close(closed.at.path, closed.text, closed.place)
  })

  for (let i = 0; i < text.length; i += CHUNK) {
    if (isOver) return
    parser.write(text.slice(i, i + CHUNK))
  }
  if (!isOver) parser.close()
}

/** Value of an attribute of the element, or undefined. */
export const attributeOf = ({ attributes }: XmlElement, name: string): string | undefined =>
  Object.hasOwn(attributes, name) ? attributes[name].value : undefined

/** Paths met so far as a tree: building the text of each path once is a third of the time of a long file. */
interface PathNode {
  path: string
  inner: Map<string, PathNode>
}

function step(from: PathNode, name: string): PathNode {
  const known = from.inner.get(name)
  if (known !== undefined) return known
  const made = { path: from.path === '' ? name : `${from.path}/${name}`, inner: new Map<string, PathNode>() }
  from.inner.set(name, made)
  return made
}

const shortName = (name: string): string => (name.length > 60 ? `${name.slice(0, 60)}…` : name)

/** The parser's own words without its place, which stands in the problem, and never longer than a line. */
const withoutPlace = (message: string): string =>
  (shownValue(message.replace(/^\d+:\d+: /, '')) ?? '').replace(/^"|"$|\.(?="$)/g, '')
