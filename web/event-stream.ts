/** One event of a stream. */
export interface StreamEvent {
  kind: string
  data: string
  id: string | null
}

/**
 * Events in the text of a stream as it comes in pieces; a comment is nothing but a sign of life.
 *
 * EventSource cannot send a token in a header, and a token in an address would reach logs.
 *
 * @source WHATWG HTML, 9.2.6 Interpreting an event stream
 */
export function eventReader(): (piece: string) => StreamEvent[] {
  let rest = ''
  return (piece) => {
    // A lone CR at the end may be the first half of CR LF.
    const text = rest + piece
    const whole = text.endsWith('\r') ? text.slice(0, -1) : text
    const blocks = whole.replace(/\r\n?/g, '\n').split('\n\n')
    rest = (blocks.pop() ?? '') + (text.endsWith('\r') ? '\r' : '')
    return blocks.flatMap(eventOf)
  }
}

function eventOf(block: string): StreamEvent[] {
  const event: StreamEvent = { kind: 'message', data: '', id: null }
  const data: string[] = []
  for (const line of block.split('\n')) {
    const [, name, value] = /^([^:]+)(?:: ?(.*))?$/.exec(line) ?? []
    if (name === 'data') data.push(value ?? '')
    else if (name === 'event') event.kind = value ?? 'message'
    else if (name === 'id') event.id = value ?? ''
  }
  return data.length === 0 ? [] : [{ ...event, data: data.join('\n') }]
}
