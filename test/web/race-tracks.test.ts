import { describe, expect, it } from 'vitest'
import { closeMarks, dayStrips, RACE, raceBattery, raceEnergyY } from '../../web/charts/race-tracks.ts'
import { sampleRace, sampleRaceDay } from './sample-race.ts'

const [SAT, SUN] = ['2026-10-17', '2026-10-18']
const NIGHT = RACE.nightPx

describe('days side by side', () => {
  it('share the room by their lengths, a folded night behind each', () => {
    const { strips, width } = dayStrips(sampleRace(), 400)
    expect(width).toBe(400)
    expect(strips.map(({ fromX, toX }) => [fromX, toX])).toEqual([
      [0, 180],
      [200, 380],
    ])
    const { series, drives } = strips[1].day
    // Two of twelve hours lie before the drive.
    expect(strips[1].x(drives[0].fromMs)).toBe(200 + 180 / 6)
    expect(strips[1].x(series?.atMs[3] ?? 0)).toBe(380)
  })

  it('keep room for a figure each, however many there are', () => {
    const many = Array.from({ length: 12 }, (_, d) => sampleRaceDay(`2026-10-${10 + d}`))
    const { strips, width } = dayStrips(sampleRace(many), 320)
    expect(width).toBe(12 * (RACE.leastDayPx + NIGHT))
    for (const { fromX, toX } of strips) expect(toX - fromX).toBeCloseTo(RACE.leastDayPx, 0)
  })

  it('leave the usual room to a day that has no plan', () => {
    const waiting = sampleRaceDay(SUN, { state: 'waiting', series: null, road: null })
    const { strips } = dayStrips(sampleRace([sampleRaceDay(SAT), waiting]), 400)
    expect(strips[1].toX - strips[1].fromX).toBe(180)
  })
})

describe('the battery through days and nights', () => {
  const y = raceEnergyY(5000, 0)

  it('stands on its scale, empty below and full above', () => {
    expect([0, 2500, 5000, 6000].map(y)).toEqual([RACE.battery, RACE.battery / 2, 0, 0])
  })

  it('is one line that goes straight over each night', () => {
    const { strips } = dayStrips(sampleRace(), 400)
    const path = raceBattery(strips, y)
    expect(path.match(/M/g)).toHaveLength(1)
    expect(path).toContain(`L180,${y(2500)}L200,${y(2500)}L200,${y(4000)}`)
  })

  it('is broken where a day has no plan', () => {
    const waiting = sampleRaceDay(SUN, { state: 'waiting', series: null, road: null })
    const { strips } = dayStrips(sampleRace([sampleRaceDay(SAT), waiting, sampleRaceDay('2026-10-19')]), 600)
    expect(raceBattery(strips, y).match(/M/g)).toHaveLength(2)
  })

  it('is marked at each close in the night behind its day, with its range', () => {
    const { strips } = dayStrips(sampleRace(), 400)
    expect(closeMarks(strips, y).map(({ x, y: at, range }) => [x, at, range])).toEqual(
      [190, 390].map((x) => [x, y(2500), { lowY: y(2000), highY: y(3000) }]),
    )
  })
})
