import { raw } from './json-path.ts'

/** What a value may be replaced with; `isWrong` where no field of that type may take it. */
export interface Odd {
  what: string
  value: unknown
  isWrong: boolean
  /** Not JSON at all, so that the field cannot be named but the line is. */
  isBare?: boolean
}

const wrong = (what: string, value: unknown): Odd => ({ what, value, isWrong: true })
const perhaps = (what: string, value: unknown): Odd => ({ what, value, isWrong: false })
const bare = (text: string): Odd => ({ what: `bare ${text}`, value: raw(text), isWrong: true, isBare: true })

const NESTED = raw(`${'['.repeat(10_000)}${']'.repeat(10_000)}`)
const NESTED_OBJECT = raw(`${'{"a":'.repeat(5_000)}1${'}'.repeat(5_000)}`)

/** In place of anything. */
export const ODD: Odd[] = [wrong('deep nesting', NESTED), wrong('deep objects', NESTED_OBJECT), bare('undefined')]

export const ODD_NUMBERS: Odd[] = [
  wrong('text', '12'),
  wrong('no text', ''),
  wrong('NaN as text', 'NaN'),
  wrong('Infinity as text', 'Infinity'),
  wrong('a list', [1]),
  wrong('an object', {}),
  wrong('true', true),
  wrong('1e400', raw('1e400')),
  wrong('-1e400', raw('-1e400')),
  wrong('1e308', 1e308),
  wrong('-1e308', -1e308),
  wrong('beyond 2^53', raw('9007199254740993')),
  perhaps('null', null),
  perhaps('-1', -1),
  perhaps('0', 0),
  perhaps('-0', raw('-0')),
  perhaps('the least number', 5e-324),
  perhaps('a third', 1 / 3),
  bare('NaN'),
  bare('Infinity'),
  bare('01'),
  bare('.5'),
  bare('+1'),
  bare('0x10'),
  bare('1,5'),
]

export const ODD_TEXTS: Odd[] = [
  wrong('a number', 12),
  wrong('null', null),
  wrong('false', false),
  wrong('a list', ['x']),
  wrong('an object', { toString: 1 }),
  wrong('no text', ''),
  wrong('100,000 letters', 'x'.repeat(100_000)),
  wrong('NUL', 'a\u0000b'),
  wrong('a line break', 'a\nb'),
  wrong('a bell', 'a\u0007b'),
  wrong('half a character', 'a\ud83d'),
  wrong('the other half', '\ude00b'),
  perhaps('__proto__', '__proto__'),
  perhaps('constructor', 'constructor'),
  perhaps('right to left', '\u202emirror'),
  perhaps('one space', ' '),
  perhaps('a quotation mark', '"; drop table documents; --'),
  bare("'single'"),
  bare('"open'),
]

export const ODD_DATES = [
  '2026-02-30',
  '2026-13-01',
  '2025-02-29',
  '0000-00-00',
  '2026-1-7',
  '+12026-10-17',
  '17.10.2026',
]
export const ODD_INSTANTS = [
  '2026-02-30T08:00:00Z',
  '2026-10-17T25:00:00Z',
  '2026-10-17T08:60:00Z',
  '2026-10-17T08:00:00',
  '2026-10-17',
  '9999-12-31T23:59:59Z',
  '1760688000000',
]
export const ODD_TIMES = ['24:00', '25:61', '8:00', '08.00', '08:00:60', '-1:00', '08:00Z']
export const ODD_ZONES = ['Mars/Olympus', 'UTC+2', 'Europe/Nowhere', '../etc/passwd', '+02:00', 'CEST', 'Africa/']

/** Names that a careless object already has. */
export const ODD_KEYS = [
  '__proto__',
  'constructor',
  'prototype',
  'toString',
  'hasOwnProperty',
  '',
  'colour',
  'id ',
  '0',
]
