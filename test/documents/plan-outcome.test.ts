import { describe, expect, test } from 'vitest'
import { plannedText, spoken } from '../../server/documents/plan-outcome.ts'

const held = { lackJ: -720, lateS: 0, isFinished: true, arrivalMs: 0, reachedM: 568_000 }

describe('what a plan comes to', () => {
  test('says when and how much earlier it could be, where the forecast holds', () => {
    expect(plannedText('Blue Gate', '15:58', held, 94.3)).toBe(
      'Blue Gate is reached 15:58 at the earliest, and no plan can be more than 1 min 35 s earlier.',
    )
  })

  test('says what is missing where no forecast was found to hold', () => {
    // 43,600 J are 12.1 Wh.
    expect(plannedText('Saltpan', '16:12', { ...held, lackJ: 43_600 }, 10)).toBe(
      'No speeds were found that keep all that is wanted; the closest reach Saltpan 16:12, 13 Wh short of what is wanted.',
    )
    expect(plannedText('Saltpan', '16:12', { ...held, lackJ: 3600, lateS: 61 }, 10)).toMatch(
      /1 Wh short of what is wanted and 1 min 1 s late at a stop\.$/,
    )
  })

  test.each([
    [0.2, '1 s'],
    [59, '59 s'],
    [60, '1 min'],
    [61.5, '1 min 2 s'],
  ])('%s s are %s', (seconds, words) => expect(spoken(seconds)).toBe(words))
})
