import * as fc from 'fast-check'
import { afterAll, describe, expect, test } from 'vitest'
import { checkDocument } from '../../server/documents/check.ts'
import { type DrivenDay, drivenRace, forecastRequest } from '../../server/documents/forecast.ts'
import { edgeAt } from '../../server/engine/tracker-figures.ts'
import type { TrackerSteps } from '../../server/engine/balance.ts'
import { channelsOf, type Tracker } from '../../server/engine/tracker.ts'
import { anyRequest } from '../support/arbitrary.ts'

function dayOf(input: unknown): DrivenDay {
  const { document, problems } = checkDocument(forecastRequest, input)
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return drivenRace(document, (day) => day).days[0]
}

const met = new Set<string | null>()

/** What a tracker's steps break, each named once with its step. */
function breaches(steps: TrackerSteps, { own, tracker }: { own: Tracker; tracker: Tracker }): string[] {
  const { inputMinV, inputMaxV, inputMaxA, maxW, outputMaxA, leastRiseV = 0 } = own.window
  const slack = 1 + 1e-9
  const found = new Map<string, number>()
  for (let i = 0; i < steps.inputW.length; i++) {
    const [W, V, packV, outW] = [steps.inputW[i], steps.inputV[i], steps.packV[i], steps.outputW[i]]
    const need = (isMet: boolean, what: string): void => void (isMet || found.set(what, i))
    met.add(edgeAt(steps, i))
    need(W + steps.deniedW[i] + steps.fullW[i] <= steps.bestW[i] * slack, 'no more than its best')
    need(outW <= W * slack && outW >= 0, 'no more out than in')
    if (W === 0) continue
    need(own.isDead !== true && tracker.isDead !== true, 'nothing by the dead')
    need(W <= maxW * slack && W <= inputMaxA * V * slack, 'input ceilings')
    need(outW <= outputMaxA * packV * slack, 'output ceiling')
    need(V >= inputMinV && V <= Math.min(inputMaxV, packV - leastRiseV), 'input voltages')
  }
  return [...found].map(([what, i]) => `${own.name}: ${what}, step ${i}`)
}

describe('for any car, road, sky and day', { timeout: 180_000 }, () => {
  test('no tracker takes more than its share of its string’s best, gives more than it takes, or leaves its window', () => {
    fc.assert(
      fc.property(anyRequest(), (input) => {
        const { forecast, race } = dayOf(input)
        const held = race.car.trackers.flatMap((tracker) => channelsOf(tracker).map((own) => ({ own, tracker })))
        const broken = forecast.balance.trackers.flatMap(({ steps }, t) => breaches(steps, held[t]))
        expect(broken).toEqual([])
      }),
      { numRuns: 40, seed: 20261020 },
    )
  })

  test('the day’s income is what the trackers took, and their loss what they kept or drew', () => {
    fc.assert(
      fc.property(anyRequest(), (input) => {
        const { forecast } = dayOf(input)
        const { spans, trackers } = forecast.balance
        const sum = (of: (span: (typeof spans)[number]) => number): number => spans.reduce((J, span) => J + of(span), 0)
        const all = (of: (day: (typeof trackers)[number]) => number): number =>
          trackers.reduce((J, day) => J + of(day), 0)
        const near = (a: number, b: number): void =>
          expect(Math.abs(a - b)).toBeLessThanOrEqual(1e-9 * (Math.abs(a) + Math.abs(b)) + 1e-6)
        near(
          all((day) => day.inputJ),
          sum((span) => span.income),
        )
        near(
          all((day) => day.lossJ + day.standbyJ),
          sum((span) => span.trackers),
        )
        near(
          all((day) => day.deniedJ),
          sum((span) => span.window + span.full),
        )
      }),
      { numRuns: 30, seed: 20261019 },
    )
  })

  afterAll(() => {
    for (const limit of [null, 'power', 'current', 'input-low', 'dead', 'derated']) expect(met).toContain(limit)
  })
})
