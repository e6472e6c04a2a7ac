import { describe, expect, it } from 'vitest'
import type { DayBudget } from '../../server/documents/budget.ts'
import { comparison, daySentence, spoken, stageSentence } from '../../web/sentence.ts'
import { balanceOf, LEDGER, sampleAt, sampleDay } from './sample-day.ts'

const say = (day: DayBudget): string => spoken(daySentence(day)).replaceAll('\u202f', ' ')
const ends = (kind: DayBudget['outcome']['kind'], at: string | null, km: number | null, text = 'Words.') => ({
  kind,
  text,
  at,
  km,
})

describe('the sentence of the day', () => {
  it('says what to hold, where that leads and what is left', () => {
    expect(say(sampleDay())).toBe(
      'Hold 78 km/h: reach Blue Gate 14:00, close the day with 2 080 Wh, 41 % charge, at least 1 340 Wh above reserve.',
    )
  })

  it('does not claim a speed that limits or the motor never allow', () => {
    expect(say(sampleDay({ heldKmh: 120 }))).toMatch(
      /^Hold 120 km\/h where limits and motor allow, 80 km\/h at most: reach Blue Gate 14:00, /,
    )
    expect(say(sampleDay({ heldKmh: 80 }))).toMatch(/^Hold 80 km\/h: /)
  })

  it('does not name one speed where several are set', () => {
    expect(say(sampleDay({ heldKmh: null }))).toMatch(/^Hold the set speeds: reach Blue Gate 14:00, /)
  })

  it('says where the clock stops the car', () => {
    const [first, second] = sampleDay().stages
    const day = sampleDay({
      outcome: ends('cut-off', sampleAt('17:00'), 356.4),
      stages: [first, { ...second, isFinished: false, toKm: 356.4 }],
    })
    expect(say(day)).toBe(
      'Hold 78 km/h: stop 17:00 at km 356 before Blue Gate, close the day with 2 080 Wh, 41 % charge.',
    )
  })

  it('says that a stop goes on the next day when the clock ends inside it', () => {
    const day = sampleDay({ outcome: ends('cut-off', sampleAt('11:10'), 200), stages: sampleDay().stages.slice(0, 1) })
    expect(say(day)).toBe(
      'Hold 78 km/h: reach Twin Wells 11:00, part of the stop is left for the next day, close the day with 2 080 Wh, 41 % charge.',
    )
  })

  it('says how far and where the battery falls below the reserve', () => {
    const day = sampleDay({
      outcome: ends('below-reserve', sampleAt('14:00'), 400),
      lowest: { ...sampleDay().lowest, wh: 312 },
      marginWh: -198,
    })
    expect(say(day)).toBe(
      'Change the plan of 78 km/h: the battery falls 200 Wh below the reserve near Blue Gate, 14:00.',
    )
  })

  it('calls a miss of a few Wh a miss, never nothing', () => {
    const day = sampleDay({
      outcome: ends('below-reserve', sampleAt('14:00'), 400),
      lowest: { ...sampleDay().lowest, wh: 508 },
      marginWh: -2,
    })
    expect(say(day)).toContain('the battery falls to just under the reserve near Blue Gate')
  })

  it('says when the battery runs flat and what the day lacks', () => {
    const day = sampleDay({
      outcome: ends('runs-flat', sampleAt('13:05'), 326),
      ledger: { ...LEDGER, shortWh: 642 },
    })
    expect(say(day)).toBe('Change the plan of 78 km/h: the battery runs flat at 13:05, km 326; the day lacks 640 Wh.')
  })

  it('names the stop that closes before the car comes', () => {
    const day = sampleDay({ outcome: ends('stop-missed', sampleAt('11:00'), 200) })
    expect(say(day)).toBe('Change the plan of 78 km/h: Twin Wells closes before the car comes at 11:00.')
  })

  it('says which speed comes nearest when none meets the target', () => {
    const missed = { outcome: ends('no-speed-meets-target', null, null), heldKmh: 62 }
    const target = { target: balanceOf(2550, 50), targetMarginWh: -480.7 }
    expect(say(sampleDay({ ...missed, ...target }))).toBe(
      'Change the plan: no speed meets the target; 62 km/h comes nearest, 470 Wh under it.',
    )
    const low = { lowest: { ...sampleDay().lowest, wh: 402 }, marginWh: -108 }
    expect(say(sampleDay({ ...missed, ...low }))).toBe(
      'Change the plan: no speed meets the reserve; 62 km/h comes nearest, 110 Wh below the reserve at Blue Gate.',
    )
  })

  it('says why a battery that is not flat gives no more', () => {
    const text = 'The pack is too cold to give the power asked of it at Twin Wells, 11:30.'
    const outcome = { kind: 'runs-flat' as const, text, at: sampleAt('11:30'), km: 200 }
    expect(say(sampleDay({ outcome, ledger: { ...LEDGER, shortWh: 1304 } }))).toBe(
      'Change the plan of 78 km/h: the pack is too cold to give the power asked of it at Twin Wells, 11:30; ' +
        'the day lacks 1 300 Wh.',
    )
  })

  it('stays parked on a day without a stage', () => {
    expect(say(sampleDay({ outcome: ends('parked', null, null), stages: [], heldKmh: null }))).toBe(
      'Stay parked: close the day with 2 080 Wh, 41 % charge, at least 1 340 Wh above reserve.',
    )
  })

  it('carries the exact energy behind every printed one', () => {
    const energies = daySentence(sampleDay()).flatMap((part) =>
      typeof part === 'string' || part.wh === undefined ? [] : [part.wh],
    )
    expect(energies).toEqual([2069.3, 1344.1])
  })
})

describe('the sentence of a stage', () => {
  const text = (day: DayBudget, i: number) => spoken(stageSentence(day, day.stages[i])).replaceAll('\u202f', ' ')

  it('says arrival, what is left then, and the departure after its stop', () => {
    const day = sampleDay()
    expect(text(day, 0)).toMatch(
      /^Hold 78 km\/h to Twin Wells: arrive 11:00 with 3 140 Wh, 62 % charge; leave 11:30 with /,
    )
    expect(text(day, 1)).toBe('Hold 78 km/h to Blue Gate: arrive 14:00 with 3 140 Wh, 62 % charge.')
  })

  it('says where the day ends on a stage that is not finished', () => {
    const day = sampleDay()
    day.stages[1] = { ...day.stages[1], isFinished: false, toKm: 356.4 }
    expect(text(day, 1)).toBe(
      'Hold 78 km/h towards Blue Gate: the day ends at km 356, 14:00 with 3 140 Wh, 62 % charge.',
    )
  })
})

describe('another speed', () => {
  const tried = (change: Partial<DayBudget>, arriveAt: string): DayBudget => {
    const day = sampleDay(change)
    day.stages[1] = { ...day.stages[1], arriveAt }
    return day
  }
  const text = (now: DayBudget): string => comparison(sampleDay(), now)?.replaceAll('\u202f', ' ') ?? ''

  it('is compared by arrival and by what is left at the close', () => {
    const spendings = LEDGER.spendings.map((line) => (line.id === 'drag' ? { ...line, wh: line.wh + 310 } : line))
    const now = tried({ heldKmh: 82, ledger: { ...LEDGER, spendings } }, sampleAt('13:48'))
    expect(text(now)).toBe('+4 km/h: arrive 12 min earlier, 310 Wh less at close')
  })

  it('that changes nothing says so', () => {
    expect(text(tried({ heldKmh: 77 }, sampleAt('14:00')))).toBe(
      '\u22121 km/h: arrive at the same time, the same at close',
    )
  })

  it('that leaves another opening balance says so first', () => {
    const ledger = { ...LEDGER, openingWh: 3046.2 }
    const now = tried({ heldKmh: 77, opening: balanceOf(3046.2, 60), ledger }, sampleAt('14:02'))
    expect(text(now)).toBe('\u22121 km/h: open with 190 Wh more, arrive 2 min later, 190 Wh more at close')
  })

  it('that no longer arrives is compared by road', () => {
    const now = tried({ heldKmh: 60, drivenKm: 356 }, sampleAt('17:00'))
    now.stages[1] = { ...now.stages[1], isFinished: false }
    now.stages[0] = { ...now.stages[0], isFinished: false }
    expect(text(now)).toBe('\u221218 km/h: 44 km less far, the same at close')
  })

  it('has nothing to compare with on the first answer', () => {
    const day = sampleDay()
    expect(comparison(null, day)).toBeNull()
    expect(comparison(day, day)).toBeNull()
  })
})
