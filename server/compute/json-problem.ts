import type { Problem } from '../documents/problem.ts'

type State = 'value' | 'first-value' | 'key' | 'first-key' | 'colon' | 'after'

interface Token {
  /** One of `{ } [ ] , :`, or what it is. */
  kind: string
  from: number
  to: number
}

const WHITESPACE = /[ \t\n\r]*/y
const SCALAR = /(?:-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?|true|false|null)(?![\w.])/y
// oxlint-disable-next-line no-control-regex -- JSON allows no control characters in strings
const PLAIN = /[^"\\\u0000-\u001f]*/y
const ESCAPE = /\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4})/y
const WORD = /[\w.+-]{1,40}/y

/** The first place where a text stops being JSON (RFC 8259); `JSON.parse` does not always name it. */
export function jsonProblem(text: string): Problem | null {
  const open: string[] = []
  let state: State = 'value'
  for (let token = tokenAt(text, 0); ; token = tokenAt(text, token.to)) {
    if (token.kind === 'end' && state === 'after' && open.length === 0) return null
    const next = stateAfter(state, token.kind, open)
    if (next === null) return problemAt(text, token, expectation(state, token.kind, open))
    state = next
  }
}

/** What may come next; null where the token does not belong. */
function stateAfter(state: State, token: string, open: string[]): State | null {
  const inside = open[open.length - 1]
  const isValue = state === 'value' || state === 'first-value'
  if (isValue && (token === '{' || token === '[')) {
    open.push(token)
    return token === '{' ? 'first-key' : 'first-value'
  }
  if (isValue && (token === 'string' || token === 'scalar')) return 'after'
  if ((state === 'key' || state === 'first-key') && token === 'string') return 'colon'
  if (state === 'colon' && token === ':') return 'value'
  if (state === 'after' && token === ',' && inside !== undefined) return inside === '{' ? 'key' : 'value'
  const closes =
    (token === '}' && inside === '{' && state !== 'key' && state !== 'value' && state !== 'colon') ||
    (token === ']' && inside === '[' && state !== 'value')
  if (!closes) return null
  open.pop()
  return 'after'
}

function expectation(state: State, token: string, open: string[]): string {
  if (token === 'bad-string')
    return 'expected a text in double quotes on one line, with \\ only before " \\ / b f n r t u'
  if (state === 'key') return 'expected a name in double quotes'
  if (state === 'first-key') return 'expected a name in double quotes or "}"'
  if (state === 'colon') return 'expected ":"'
  if (state === 'value') return 'expected a value'
  if (state === 'first-value') return 'expected a value or "]"'
  if (open.length === 0) return 'expected the end of the document'
  return `expected "," or "${open[open.length - 1] === '{' ? '}' : ']'}"`
}

const endOf = (pattern: RegExp, text: string, at: number): number => {
  pattern.lastIndex = at
  return pattern.test(text) ? pattern.lastIndex : at
}

function tokenAt(text: string, at: number): Token {
  const from = endOf(WHITESPACE, text, at)
  const c = text[from]
  if (c === undefined) return { kind: 'end', from, to: from }
  if ('{}[],:'.includes(c)) return { kind: c, from, to: from + 1 }
  if (c === '"') return stringAt(text, from)
  const to = endOf(SCALAR, text, from)
  return { kind: to > from ? 'scalar' : 'unknown', from, to }
}

function stringAt(text: string, from: number): Token {
  let to = from + 1
  for (;;) {
    to = endOf(PLAIN, text, to)
    if (text[to] === '"') return { kind: 'string', from, to: to + 1 }
    const escaped = endOf(ESCAPE, text, to)
    if (escaped === to) return { kind: 'bad-string', from: to, to }
    to = escaped
  }
}

function problemAt(text: string, token: Token, detail: string): Problem {
  const before = text.slice(0, token.from)
  const lineStart = before.lastIndexOf('\n') + 1
  const found = text.slice(token.from, Math.max(endOf(WORD, text, token.from), token.from + 1))
  return {
    field: 'document',
    value: found === '' ? 'the end of the body' : JSON.stringify(found),
    detail,
    line: before.split('\n').length,
    column: token.from - lineStart + 1,
  }
}
