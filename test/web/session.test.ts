import { describe, expect, it } from 'vitest'
import { ownerToken, standingAfter } from '../../web/links.ts'

describe('the owner’s link', () => {
  it('carries its token after #, and nothing else counts as one', () => {
    const token = 'kQ3-x_0aB'
    expect(ownerToken(`#owner=${token}`)).toBe(token)
    for (const hash of ['', '#', '#owner=', '#/day?owner=x', `#owner=${token}&x=1`, `#owner=${token} `])
      expect(ownerToken(hash), hash).toBeNull()
  })

  it('is spent when refused, but not when the service did not answer', () => {
    expect(standingAfter(null)).toBe('inside')
    expect([401, 403, 422].map(standingAfter)).toEqual(['spent', 'spent', 'spent'])
    expect([0, 503].map(standingAfter)).toEqual(['no-contact', 'no-contact'])
  })
})
