import { describe, expect, it } from 'vitest'
import { eventReader, type StreamEvent } from '../../web/event-stream.ts'
import { shareToken, tieAfter } from '../../web/links.ts'

// The examples of WHATWG HTML, 9.2.6, with the ends of line that it allows.
const STREAM = [
  ': test stream\n\n',
  'data: first event\nid: 1\n\n',
  'event: forecast\r\ndata:second event\r\nid\r\n\r\n',
  'data:  third event\r\r',
  'data\ndata\n\n',
  'id: 9\n\n',
  'data: cut off',
].join('')

const EVENTS: StreamEvent[] = [
  { kind: 'message', data: 'first event', id: '1' },
  { kind: 'forecast', data: 'second event', id: '' },
  { kind: 'message', data: ' third event', id: null },
  { kind: 'message', data: '\n', id: null },
]

describe('a stream of events', () => {
  it('is read as the standard says: comments and cut-off events are none', () => {
    expect(eventReader()(STREAM)).toEqual(EVENTS)
  })

  it('reads the same however the network cuts it', () => {
    for (const size of [1, 2, 3, 7, 20]) {
      const read = eventReader()
      const pieces = STREAM.match(new RegExp(`[\\s\\S]{1,${size}}`, 'g')) ?? []
      expect(pieces.flatMap(read), `pieces of ${size}`).toEqual(EVENTS)
    }
  })
})

describe('a share link', () => {
  it('carries its token after #', () => {
    expect([shareToken('#abc-_9'), shareToken('#token=abc-_9'), shareToken('')]).toEqual(['abc-_9', 'abc-_9', ''])
  })

  it('has ended when refused; a service that is away or has no plan may come back', () => {
    expect([401, 403, 410].map((status) => tieAfter(status))).toEqual(['ended', 'ended', 'ended'])
    expect(tieAfter(404, 'no-such-share')).toBe('ended')
    expect([404, 0, 503, 500].map((status) => tieAfter(status))).toEqual(['unfollowed', 'lost', 'lost', 'lost'])
  })
})
