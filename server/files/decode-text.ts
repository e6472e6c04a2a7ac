import type { Problem } from '../documents/problem.ts'
import { overLimit } from './file-reading.ts'

export type Decoded = { text: string; problems?: undefined } | { text?: undefined; problems: Problem[] }

/**
 * The text of a file's bytes: UTF-8, or UTF-16 in either order, with or without a byte order mark.
 * Bytes that are no such text and files over the limit are refused.
 */
export function decodeText(bytes: Uint8Array): Decoded {
  const tooLarge = overLimit(bytes.length)
  if (tooLarge !== null) return { problems: [tooLarge] }
  const encoding = encodingOf(bytes)
  const text = decoded(bytes, encoding)
  if (text !== null) return { text: text.replace(/^\uFEFF/, '') }
  return { problems: [badBytes(bytes, encoding)] }
}

type Encoding = 'utf-8' | 'utf-16le' | 'utf-16be'

/** By the byte order mark; without one a zero byte beside the first character tells UTF-16. */
function encodingOf(bytes: Uint8Array): Encoding {
  const [a, b] = bytes
  if (bytes.length < 2) return 'utf-8'
  if ((a === 0xff && b === 0xfe) || (a !== 0 && b === 0)) return 'utf-16le'
  if ((a === 0xfe && b === 0xff) || (a === 0 && b !== 0)) return 'utf-16be'
  return 'utf-8'
}

function decoded(bytes: Uint8Array, encoding: Encoding): string | null {
  try {
    return new TextDecoder(encoding, { fatal: true, ignoreBOM: true }).decode(bytes)
  } catch {
    return null
  }
}

const BLOCK = 16_384

/** Where the text ends to be one: whole blocks first, then byte by byte. */
function badBytes(bytes: Uint8Array, encoding: Encoding): Problem {
  const decoder = new TextDecoder(encoding, { fatal: true, ignoreBOM: true })
  let from = 0
  let text = ''
  try {
    for (; from < bytes.length; from += BLOCK)
      text += decoder.decode(bytes.subarray(from, from + BLOCK), { stream: true })
  } catch {
    text += goodStart(bytes.subarray(encodedLength(text, encoding), from + BLOCK), encoding)
  }
  const before = text.replace(/^\uFEFF/, '').split(/\r\n|\r|\n/)
  const bad = bytes[Math.min(encodedLength(text, encoding), bytes.length - 1)]
  return {
    field: 'file',
    value: `byte 0x${bad.toString(16).padStart(2, '0')}`,
    detail: `expected text as UTF-8 or UTF-16; this byte is not ${encoding.toUpperCase()}. Save the file as UTF-8`,
    line: before.length,
    column: before[before.length - 1].length + 1,
  }
}

const encodedLength = (text: string, encoding: Encoding): number =>
  encoding === 'utf-8' ? new TextEncoder().encode(text).length : text.length * 2

/** The letters before the first byte that does not fit. */
function goodStart(bytes: Uint8Array, encoding: Encoding): string {
  const decoder = new TextDecoder(encoding, { fatal: true, ignoreBOM: true })
  let text = ''
  try {
    for (let i = 0; i < bytes.length; i++) text += decoder.decode(bytes.subarray(i, i + 1), { stream: true })
  } catch {
    // What came before is the answer.
  }
  return text
}

/** What a text is by its content: GPX, a table, or neither. */
export function looksLike(text: string): 'gpx' | 'csv' | 'unknown' {
  const start = text.slice(0, 65_536).replace(/^\uFEFF/, '')
  if (/^\s*</.test(start)) return /<(?:[\w.-]+:)?gpx[\s>]/.test(start) ? 'gpx' : 'unknown'
  const header = start.split(/\r\n|\r|\n/).find((line) => line.trim() !== '' && !line.startsWith('#'))
  return header !== undefined && /[,;\t|]/.test(header) ? 'csv' : 'unknown'
}
