import { describe, expect, test } from 'vitest'
import { shrunk } from './shrink.ts'

describe('a failing request is made small', () => {
  test('a document keeps only what fails', async () => {
    const body = JSON.stringify({
      name: 'x',
      body: { massKg: -1, dragAreaM2: 1 },
      panels: [{ name: 'a' }, { name: 'b' }],
    })
    const smallest = await shrunk(body, async (smaller) => {
      try {
        return JSON.parse(smaller.toString()).body?.massKg === -1
      } catch {
        return false
      }
    })
    expect(smallest).toBe('{"body":{"massKg":-1}}')
  })

  test('bytes keep only what fails', async () => {
    const smallest = await shrunk(Buffer.from('lat,lon\n1,2\n3,\x004\n'), async (smaller) => smaller.includes('\x00'))
    expect(smallest).toEqual(Buffer.from('\x00'))
  })

  test('what cannot be smaller stays', async () => {
    expect(await shrunk('[1]', async () => false)).toBe('[1]')
  })
})
