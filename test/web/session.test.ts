import { describe, expect, it } from 'vitest'
import { ownerToken, standingAfter } from '../../web/session.ts'

describe('the owner’s link', () => {
  it('carries its token after #, and nothing else counts as one', () => {
    const token = 'kQ3-x_0aB'
    expect(ownerToken(`#owner=${token}`)).toBe(token)
    for (const hash of ['', '#', '#owner=', '#/day?owner=x', `#owner=${token}&x=1`, `#owner=${token} `])
      expect(ownerToken(hash), hash).toBeNull()
  })

  it('is spent when refused, but not when the service did not answer', () => {
    const refusal = (status: number) => ({ status, code: '', title: '', detail: '', errors: [] })
    expect(standingAfter(undefined)).toBe('inside')
    expect([401, 403, 422].map((status) => standingAfter(refusal(status)))).toEqual(['spent', 'spent', 'spent'])
    expect([0, 503].map((status) => standingAfter(refusal(status)))).toEqual(['no-contact', 'no-contact'])
  })
})
