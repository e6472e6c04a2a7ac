import { describe, expect, it } from 'vitest'
import { bandAxis } from '../../web/charts/axis.ts'
import {
  chargePath,
  chargeY,
  mostW,
  PLOT,
  powerBins,
  powerPath,
  powerScale,
  readingAt,
  roadHeight,
} from '../../web/charts/band.ts'
import { gateLane, laneGates } from '../../web/charts/lane.ts'
import { sampleAt, sampleDay, sampleMs } from './sample-day.ts'

const numbers = (path: string): number[] => [...path.matchAll(/-?\d+(?:\.\d+)?/g)].map(Number)

describe('the axis', () => {
  it('by time runs evenly from dawn to dusk with local hours', () => {
    const axis = bandAxis(sampleDay(), 'time', 360)
    // By hand: 12 hours on 360 px are 30 px an hour; ticks need 42 px, so every second hour.
    expect(axis.x(sampleMs('06:00'))).toBe(0)
    expect(axis.x(sampleMs('11:00'))).toBeCloseTo(150, 9)
    expect(axis.ticks.map((tick) => `${tick.text}@${tick.x}`)).toEqual([
      '06@0',
      '08@60',
      '10@120',
      '12@180',
      '14@240',
      '16@300',
      '18@360',
    ])
  })

  it('by distance stretches the road and folds still hours into fixed blocks', () => {
    const axis = bandAxis(sampleDay(), 'distance', 358)
    // By hand: 358 − 46 − 22 − 46 = 244 px for 400 km, 0.61 px a km.
    expect(axis.x(sampleMs('08:30'))).toBeCloseTo(46, 9)
    expect(axis.x(sampleMs('09:45'))).toBeCloseTo(46 + 100 * 0.61, 6)
    expect(axis.x(sampleMs('11:00'))).toBeCloseTo(46 + 200 * 0.61, 6)
    expect(axis.x(sampleMs('11:30'))).toBeCloseTo(46 + 200 * 0.61 + 22, 6)
    expect(axis.x(sampleMs('18:00'))).toBeCloseTo(358, 6)
    expect(axis.ticks.at(-1)?.text).toBe('400\u202fkm')
  })

  it('never runs backwards and finds its way back', () => {
    for (const mode of ['time', 'distance'] as const) {
      const axis = bandAxis(sampleDay(), mode, 358)
      let last = -1
      for (let atMs = axis.fromMs; atMs <= axis.toMs; atMs += 300_000) {
        const x = axis.x(atMs)
        expect(x).toBeGreaterThanOrEqual(last)
        expect(axis.x(axis.atMs(x))).toBeCloseTo(x, 3)
        last = x
      }
      expect(last).toBeCloseTo(358, 6)
    }
  })

  it('falls back to time on a day without a road', () => {
    const spans = sampleDay().spans.filter((span) => span.kind !== 'drive')
    expect(bandAxis(sampleDay({ spans }), 'distance', 360).ticks[1].text).toBe('08')
  })
})

describe('the power bins', () => {
  const day = sampleDay()
  const bins = powerBins(day)

  it('cover the day without gap and break where the car starts and stops', () => {
    expect(bins[0].fromMs).toBe(sampleMs('06:00'))
    expect(bins.at(-1)?.toMs).toBe(sampleMs('18:00'))
    bins.slice(1).forEach((bin, i) => expect(bin.fromMs).toBe(bins[i].toMs))
    const edges = bins.map((bin) => bin.fromMs)
    for (const clock of ['08:30', '11:00', '11:30', '14:00']) expect(edges).toContain(sampleMs(clock))
  })

  it('break at an odd minute, too, and leave no sliver beside it', () => {
    const spans = sampleDay().spans.map((span) => ({ ...span }))
    spans[2].to = sampleAt('11:33')
    spans[3].from = sampleAt('11:33')
    const edges = powerBins(sampleDay({ spans })).map((bin) => bin.fromMs)
    expect(edges).toContain(sampleMs('11:33'))
    expect(edges).not.toContain(sampleMs('11:30'))
    expect(edges).toContain(sampleMs('11:40'))
  })

  it('keep the energy of the steps they stand for', () => {
    const energy = bins.reduce((sum, bin) => sum + (bin.inW * (bin.toMs - bin.fromMs)) / 3.6e6, 0)
    // By hand: 600·2.5 + 800·1.25 + 850·1.25 + 900·0.5 + 800·2.5 + 500·4 Wh.
    expect(energy).toBeCloseTo(1500 + 1000 + 1062.5 + 450 + 2000 + 2000, 6)
  })

  it('share one scale above and below, and end before a reserve of 10 %', () => {
    expect(mostW(bins)).toBeCloseTo(1500, 6)
    const height = powerScale(bins)
    const top = 40
    const zero = top + PLOT.half
    expect(
      Math.max(...numbers(powerPath(bins, bandAxis(day, 'time', 300), 'out', zero)).filter((_, i) => i % 2 === 1)),
    ).toBeLessThan(chargeY(top)(10))
    expect(height(750) * 2).toBeCloseTo(height(1500), 9)
  })
})

describe('the tracks', () => {
  const day = sampleDay()
  const axis = bandAxis(day, 'time', 360)

  it('battery 0 to 100 % spans the whole plot and its middle is 50 %', () => {
    const y = chargeY(40)
    expect([y(100), y(50), y(0)]).toEqual([40, 40 + PLOT.half, 40 + PLOT.full])
  })

  it('the battery line starts at the opening and ends at the closing charge', () => {
    const points = numbers(chargePath(day, axis, 40))
    const y = chargeY(40)
    expect(points.slice(0, 2)).toEqual([0, Math.round(y(56) * 10) / 10])
    expect(points.slice(-2)).toEqual([360, Math.round(y(41) * 10) / 10])
  })

  it('the road carries its highest point', () => {
    const { peak } = roadHeight(day, axis, 40)
    expect(peak.m).toBe(1300)
    expect(peak.x).toBeCloseTo(axis.x((sampleMs('09:45') + sampleMs('11:00')) / 2), 0)
  })

  it('can be read at any instant', () => {
    const half = readingAt(day, (sampleMs('08:30') + sampleMs('09:45')) / 2)
    // By hand: halfway between 84 % at 08:30 and 70 % at 09:45, 0 and 100 km.
    expect(half).toMatchObject({ inW: 800, outW: 1200, chargePct: 77, km: 50, speedKmh: 80 })
    expect(readingAt(day, sampleMs('18:00')).chargePct).toBe(41)
    expect(readingAt(day, sampleMs('06:00')).chargePct).toBe(56)
  })
})

describe('the lane of gates', () => {
  const day = sampleDay()

  it('names every gate but departures, and no label leaves the band or covers another', () => {
    for (const room of [280, 320, 360, 700])
      for (const mode of ['time', 'distance'] as const) {
        const { labels, tiers } = gateLane(day, bandAxis(day, mode, room - 36), room, (gate) => gate.name.length * 8)
        expect(labels).toHaveLength(laneGates(day).length)
        for (const a of labels) {
          const half = a.gate.name.length * 4
          expect(a.x - half).toBeGreaterThanOrEqual(-0.5)
          expect(a.x + half).toBeLessThanOrEqual(room + 0.5)
          expect(a.tier).toBeLessThan(tiers)
          for (const b of labels)
            if (a !== b && a.tier === b.tier)
              expect(Math.abs(a.x - b.x)).toBeGreaterThanOrEqual(half + b.gate.name.length * 4)
        }
      }
  })
})
