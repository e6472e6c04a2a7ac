import { describe, expect, it } from 'vitest'
import { earliestEnd } from '../../../server/engine/planner/back-track.ts'
import { bestDrive } from '../../../server/engine/planner/best-drive.ts'
import { frontier } from '../../../server/engine/planner/frontier.ts'
import { simulate } from '../../../server/engine/planner/simulate.ts'
import { cloudyDay, uniform } from './cloudy-day.ts'
import { everyChoice } from './every-choice.ts'
import { drivenByTheSecond } from './second-by-second.ts'
import { type Bind, type SmallWants, tightDay } from './small-day.ts'

/** What the days of the comparison hold besides road, hills and a passing front. */
const KINDS: [string, SmallWants][] = [
  ['plain', { pieces: 4 }],
  ['with a stop', { pieces: 4, hasStop: true }],
  ['with time and energy on top', { pieces: 4, hasExtra: true }],
  ['with motion and a stop', { pieces: 4, hasStop: true, hasMotion: true }],
]
const SEEDS = Array.from({ length: 20 }, (_, n) => n + 1)

describe('the best drive', () => {
  it.each<[Bind, number, SmallWants]>([
    ['floor', 7, { pieces: 4, hasStop: true, hasMotion: true }],
    ['target', 7, { pieces: 4, hasStop: true, opensLate: true }],
    ['target', 38, { pieces: 4, hasStop: true, opensLate: true }],
  ])('does not wait where it need not, held back by %s: seed %i', (bind, seed, wants) => {
    const day = tightDay(seed, wants, bind)
    const made = bestDrive(day)
    expect(made?.track.shortJ).toBeLessThanOrEqual(0)
    expect(made?.track.atS[day.pieces]).toBeLessThan(everyChoice(day, 24) + 1)
  })

  // The grid is 24 speeds a piece: it ends 1 to 3 s after the best drive on most days.
  describe.each<Bind>(['target', 'floor', 'ceiling', 'all'])('held back by %s', (bind) => {
    it.each(KINDS)('is not beaten by any choice of grid speeds: days %s', (_name, wants) => {
      const aheadS: number[] = []
      for (const seed of SEEDS) {
        const day = tightDay(seed, wants, bind)
        const choiceS = everyChoice(day, 24)
        if (choiceS === Number.POSITIVE_INFINITY) continue
        const made = bestDrive(day)
        expect(made?.track.shortJ, `seed ${seed}`).toBeLessThanOrEqual(0)
        // Neither the choices nor a plan's forecast wait on the road.
        if (made!.drive.waitS.some((s) => s > 0)) continue
        const { endS, duskJ, spareJ } = drivenByTheSecond(day, made!.drive)
        expect(Math.min(duskJ - day.targetJ, spareJ), `seed ${seed}`).toBeGreaterThan(-1)
        aheadS.push(choiceS - endS)
      }
      aheadS.sort((a, b) => a - b)
      expect(aheadS.length).toBeGreaterThan(15)
      expect(aheadS[0]).toBeGreaterThan(-1.25)
      expect(aheadS[1]).toBeGreaterThan(-0.02)
      expect(aheadS[aheadS.length >> 1]).toBeLessThan(5)
    })
  })

  it('is not beaten on days of six pieces by a coarser grid', () => {
    for (let seed = 41; seed <= 48; seed++) {
      const day = tightDay(seed, { pieces: 6, hasStop: seed % 2 === 0 }, seed % 3 === 0 ? 'all' : 'target')
      const choiceS = everyChoice(day, 9)
      const made = bestDrive(day)
      expect(made?.track.shortJ, `seed ${seed}`).toBeLessThanOrEqual(0)
      expect(made?.track.atS[6], `seed ${seed}`).toBeLessThan(choiceS + 0.02)
    }
  })

  it('is not bettered by small changes that hold', () => {
    for (const seed of [1, 4, 11]) {
      const day = cloudyDay(seed, seed === 4)
      const made = bestDrive(day)
      const endS = made?.track.atS[day.pieces] ?? Number.NaN
      const next = uniform(seed)
      let held = 0
      for (let n = 0; n < 1500; n++) {
        const size = 10 ** (-4 + 3 * next())
        const [from, to] = [next(), next()].map((share) => Math.floor(share * day.pieces))
        const speedMps = (made?.drive.speedMps ?? new Float64Array()).map((v, i) => {
          const by = n % 2 === 0 ? next() - 0.5 : i === from ? 0.5 : i === to ? -0.5 : 0
          return Math.min(Math.max(v * (1 + size * by), 30 / 3.6), day.fastestMps[i])
        })
        const track = simulate(day, { speedMps, waitS: made?.drive.waitS ?? new Float64Array() })
        if (track.shortJ > 0 || track.lateS > 0) continue
        held++
        expect(track.atS[day.pieces]).toBeGreaterThan(endS - 0.1)
      }
      expect(held).toBeGreaterThan(200)
    }
  })
})

describe('the frontier', () => {
  it('never falls in time where the sun outweighs what waiting draws', () => {
    for (const seed of [3, 9]) {
      const day = cloudyDay(seed, true)
      const found = frontier(day, 120, 6 / 3.6)
      let looked = 0
      for (let layer = 0; layer <= found.legs.length; layer += 7) {
        for (let k = 1; k < found.bins; k++) {
          const [before, after] = [k - 1, k].map((b) => found.mostJ[layer * found.bins + b])
          if (before === Number.NEGATIVE_INFINITY || found.fromS + k * found.stepS > 17 * 3600) continue
          if (k > found.lastBin[layer]) continue
          looked++
          expect(after).toBeGreaterThanOrEqual(before - 1e-6)
        }
      }
      expect(looked).toBeGreaterThan(1000)
    }
  })

  it('comes to the best drive as its bins and speeds grow finer', () => {
    for (const seed of [5, 12]) {
      const day = cloudyDay(seed, true)
      const bestS = bestDrive(day)?.track.atS[day.pieces] ?? Number.NaN
      const off = [8, 4, 2, 1].map((n) => Math.abs(earliestEnd(day, frontier(day, 30 * n, (0.75 * n) / 3.6)) - bestS))
      expect(off[3]).toBeLessThan(10)
      for (let n = 1; n < 4; n++) expect(off[n]).toBeLessThan(off[n - 1])
    }
  })
})
