import type { Chance } from './chance.ts'
import type { Mutated } from './json-mutation.ts'

const LIKELY = [...Buffer.from('0123456789<>&"\',;.:-{}[]\\ \t\n\rNe+')]

/** A text with one byte flipped, set, put in or taken out. */
export function oneByte(by: Chance, text: string): Mutated {
  const bytes = Buffer.from(text)
  const at = by.below(bytes.length)
  const byte = by.isLucky(0.5) ? by.pick(LIKELY) : by.below(256)
  const [before, after] = [bytes.subarray(0, at), bytes.subarray(at + 1)]
  const edits: [string, Buffer][] = [
    [`bit flipped at ${at}`, Buffer.from([...before, bytes[at] ^ (1 << by.below(8)), ...after])],
    [`byte ${at} set to ${byte}`, Buffer.from([...before, byte, ...after])],
    [`byte ${byte} put in at ${at}`, Buffer.from([...before, byte, ...bytes.subarray(at)])],
    [`byte ${at} taken out`, Buffer.from([...before, ...after])],
  ]
  const [what, body] = by.pick(edits)
  return { what, body, isWrong: false, names: null }
}

/** A text in other bytes altogether, or only a part of it. */
export function otherBytes(by: Chance, text: string): Mutated {
  const bytes = Buffer.from(text)
  const utf16 = Buffer.from(text, 'utf16le')
  const at = by.below(bytes.length)
  const edits: [string, Buffer, boolean][] = [
    [`cut at ${at}`, bytes.subarray(0, at), false],
    ['UTF-16, low byte first', Buffer.concat([Buffer.from([0xff, 0xfe]), utf16]), false],
    ['UTF-16, high byte first', Buffer.from(Buffer.concat([Buffer.from([0xff, 0xfe]), utf16])).swap16(), false],
    ['UTF-16, cut in a letter', utf16.subarray(0, utf16.length - 1), true],
    ['byte order mark', Buffer.concat([Buffer.from([0xef, 0xbb, 0xbf]), bytes]), false],
    ['half of a UTF-8 letter', Buffer.concat([bytes.subarray(0, at), Buffer.from([0xc3]), bytes.subarray(at)]), true],
    ['overlong UTF-8', Buffer.concat([Buffer.from([0xc0, 0xaf]), bytes]), true],
    ['nothing', Buffer.alloc(0), true],
    ['white space', Buffer.from(' \n\t '), true],
    ['zero bytes', Buffer.alloc(64), true],
    ['twice', Buffer.concat([bytes, bytes]), false],
    ['noise', Buffer.from(Array.from({ length: 200 }, () => by.below(256))), true],
    ['a picture', Buffer.from('89504e470d0a1a0a0000000d49484452', 'hex'), true],
    ['an archive', Buffer.from('504b0304140000000800', 'hex'), true],
  ]
  const [what, body, isWrong] = by.pick(edits)
  return { what, body, isWrong, names: null }
}
