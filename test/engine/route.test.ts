import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { cumulativeM, type Pieces, pieces, type RoadPoints } from '../../server/engine/route.ts'

const rad = (deg: number): number => (deg * Math.PI) / 180

/** A winding road over hills, `n` points; `at` moves along it from 0 to 1. */
function winding(n: number): RoadPoints {
  const along = (f: (at: number) => number): Float64Array => Float64Array.from({ length: n }, (_, i) => f(i / (n - 1)))
  return {
    latRad: along((at) => rad(-30 + 0.8 * at + 0.02 * Math.sin(40 * at))),
    lonRad: along((at) => rad(20 + 0.5 * Math.sin(6 * at))),
    altM: along((at) => 1000 + 300 * Math.sin(9 * at) + 100 * at),
  }
}

/** A straight road north of `n` points, one every hundredth of a degree, rising 8 m from each to the next. */
const north = (n: number): RoadPoints => ({
  latRad: Float64Array.from({ length: n }, (_, i) => rad(-30 + i / 100)),
  lonRad: new Float64Array(n).fill(rad(20)),
  altM: Float64Array.from({ length: n }, (_, i) => 1000 + 8 * i),
})

const whole = { cutsM: [], lengthM: 1000 }
const lengthOf = (points: RoadPoints): number => cumulativeM(points)[points.latRad.length - 1]
const edgesOf = (road: Pieces): number[] => [...road.fromM, road.fromM[road.count - 1] + road.lengthM[road.count - 1]]
const sum = (values: Iterable<number>): number => [...values].reduce((total, value) => total + value, 0)

describe('a road in pieces', () => {
  const points = winding(3000)
  const totalM = lengthOf(points)

  it('has pieces of about a kilometre that follow one another and add up to the road', () => {
    const road = pieces(points, [], whole)
    expect(road.count).toBe(Math.round(totalM / 1000))
    expect(Math.min(...road.lengthM)).toBeGreaterThan(990)
    expect(Math.max(...road.lengthM)).toBeLessThan(1010)
    expect(sum(road.lengthM)).toBeCloseTo(totalM, 6)
  })

  it('climbs from the first point to the last by its grades', () => {
    const road = pieces(points, [], whole)
    const climbM = sum(Array.from(road.gradeRad, (grade, i) => Math.tan(grade) * road.lengthM[i]))
    expect(climbM).toBeCloseTo(points.altM[2999] - points.altM[0], 6)
    expect(road.startAltM[0]).toBe(points.altM[0])
    for (let i = 1; i < road.count; i++) expect(road.startAltM[i]).toBe(road.endAltM[i - 1])
  })

  it('is cut exactly at stops and at the ends of stretches', () => {
    const cutsM = [12_345.678, 50_000.5]
    const stretches = [{ fromM: 12_000.25, toM: 60_000.125, limitMps: 20 }]
    const road = pieces(points, stretches, { cutsM, lengthM: 1000 })
    expect(edgesOf(road)).toEqual(expect.arrayContaining([0, 12_000.25, ...cutsM, 60_000.125]))
    expect(edgesOf(road).at(-1)).toBeCloseTo(totalM, 8)
    expect(Math.min(...road.lengthM)).toBeCloseTo(345.428, 3)
  })

  it('carries limits, surfaces and halts where the stretches say so and nowhere else', () => {
    const stretches = [
      { fromM: 5000, toM: 20_000, limitMps: 20, surfaceFactor: 1.2 },
      { fromM: 10_000, toM: 15_000, limitMps: 25, haltsPerM: 0.001, surfaceFactor: 1.4 },
      { fromM: totalM - 3000, toM: totalM + 500, limitMps: 14 },
    ]
    const road = pieces(points, stretches, whole)
    for (let i = 0; i < road.count; i++) {
      const at = road.fromM[i]
      const isOuter = at >= 5000 && at < 20_000
      const isInner = at >= 10_000 && at < 15_000
      expect(road.limitMps[i]).toBe(isOuter ? 20 : at >= totalM - 3000 ? 14 : Infinity)
      expect(road.surfaceFactor[i]).toBe(isInner ? 1.4 : isOuter ? 1.2 : 1)
      expect(road.haltsPerM[i]).toBe(isInner ? 0.001 : 0)
    }
  })

  it('cuts that are one place to the millimetre make no sliver', () => {
    const stretches = [{ fromM: 12_300.000_000_000_002, toM: totalM - 1e-7, limitMps: 20 }]
    const road = pieces(points, stretches, { cutsM: [12_300, 0, totalM, totalM + 1e-6], lengthM: 1000 })
    expect(edgesOf(road)).toContain(12_300)
    expect(Math.min(...road.lengthM)).toBeGreaterThan(900)
    expect(road.limitMps[road.count - 1]).toBe(20)
  })
})

describe('hills inside a kilometre', () => {
  /** Points along the equator, so far apart, at these heights. [m] */
  const rolling = (apartM: number, altM: number[]): RoadPoints => ({
    latRad: new Float64Array(altM.length),
    lonRad: Float64Array.from(altM, (_, i) => (i * apartM) / 6_378_137),
    altM: Float64Array.from(altM),
  })
  const climbM = (road: Pieces): number =>
    sum(Array.from(road.gradeRad, (grade, i) => Math.max(Math.tan(grade) * road.lengthM[i], 0)))

  it('waves of 1000 m at 4 % are cut at every summit and valley: 12.7 m up on each', () => {
    // Swing 2 · 0.04 · 1000/2π = 12.73 m; ten waves.
    const points = rolling(
      10,
      Array.from({ length: 1001 }, (_, i) => 20 + (40 / (2 * Math.PI)) * Math.sin((2 * Math.PI * i) / 100)),
    )
    const road = pieces(points, [], { ...whole, swingM: 5 })
    expect(climbM(road)).toBeCloseTo(10 * 12.732, 1)
    expect(edgesOf(road).slice(0, 4)).toEqual([0, 250, 750, 1250].map((m) => expect.closeTo(m, 6)))
    expect(climbM(pieces(points, [], whole))).toBeLessThan(1)
  })

  it('waves lower than the swing leave the pieces as they are', () => {
    const points = rolling(
      10,
      Array.from({ length: 1001 }, (_, i) => 2.4 * Math.sin((2 * Math.PI * i) / 100)),
    )
    expect(pieces(points, [], { ...whole, swingM: 5 })).toEqual(pieces(points, [], whole))
  })

  it('no piece of any road rises by the swing and falls by it again, or the other way round', () => {
    const heights = fc.array(fc.integer({ min: 0, max: 40 }), { minLength: 3, maxLength: 60, size: 'max' })
    let cut = 0
    fc.assert(
      fc.property(heights, (altM) => {
        const road = pieces(rolling(300, altM), [], { ...whole, swingM: 5 })
        const edges = edgesOf(road)
        for (let p = 0; p < road.count; p++) {
          const inside = altM.filter((_, i) => i * 300 >= edges[p] - 0.01 && i * 300 <= edges[p + 1] + 0.01)
          inside.forEach((summit, j) => {
            const [before, after] = [inside.slice(0, j + 1), inside.slice(j)]
            expect(Math.min(summit - Math.min(...before), summit - Math.min(...after))).toBeLessThan(5)
            expect(Math.min(Math.max(...before) - summit, Math.max(...after) - summit)).toBeLessThan(5)
          })
        }
        if (road.count > Math.ceil((altM.length - 1) * 0.3)) cut++
      }),
      { numRuns: 300 },
    )
    expect(cut).toBeGreaterThan(100)
  })

  it('heights that jump about cut a road into no more than a piece in 150 m', () => {
    const points = rolling(
      20,
      Array.from({ length: 5000 }, (_, i) => (i % 2) * 30),
    )
    expect(pieces(points, [], { ...whole, swingM: 5 }).count).toBeLessThanOrEqual((5000 * 20) / 150)
  })

  it('summits give way to stops and ends of stretches next to them', () => {
    const points = rolling(500, [0, 20, 0, 20, 0, 20, 0])
    const road = pieces(points, [{ fromM: 590, toM: 1700, limitMps: 20 }], { cutsM: [2400], lengthM: 1000, swingM: 5 })
    expect(edgesOf(road).map(Math.round)).toEqual([0, 590, 1000, 1500, 1700, 2000, 2400, 3000])
  })
})

describe('headings, grades and places', () => {
  it('a road north rises 8 m in the 1108.36 m of a hundredth of a degree', () => {
    // Meridian arc at 29°: 110,836 m a degree, from the WGS 84 radius M = a(1−e²)/(1−e²sin²φ)^1.5 by hand.
    const road = pieces(north(201), [], whole)
    expect(sum(road.lengthM) / 2).toBeCloseTo(110_836, 0)
    for (let i = 0; i < road.count; i++) {
      expect(Math.tan(road.gradeRad[i])).toBeCloseTo(8 / 1108.36, 5)
      expect(road.headingRad[i]).toBe(0)
      expect(road.lonRad[i]).toBeCloseTo(rad(20), 12)
      expect(road.altM[i]).toBeCloseTo((road.startAltM[i] + road.endAltM[i]) / 2, 5)
    }
    expect(road.latRad[0]).toBeCloseTo(rad(-30) + road.lengthM[0] / 2 / (110_836 * (180 / Math.PI)), 7)
  })

  it.each([
    [90, 0, 0.3],
    [180, -0.3, 0],
    [270, 0, -0.3],
  ])('a road to %i° has that heading', (headingDeg, latDeg, lonDeg) => {
    const ends = (from: number, by: number) => Float64Array.of(rad(from), rad(from + by))
    const road = pieces({ latRad: ends(0, latDeg), lonRad: ends(179.9, lonDeg), altM: new Float64Array(2) }, [], whole)
    for (const heading of road.headingRad) expect(heading).toBeCloseTo(rad(headingDeg), 9)
  })

  it('a road across the date line has no jump', () => {
    const points = {
      latRad: Float64Array.of(rad(-17), rad(-17)),
      lonRad: Float64Array.of(rad(179.9), rad(-179.9)),
      altM: new Float64Array(2),
    }
    const road = pieces(points, [], whole)
    expect(sum(road.lengthM)).toBeCloseTo(21_292, -2)
    for (const heading of road.headingRad) expect(heading).toBeCloseTo(rad(90), 6)
  })
})

describe('what a recorder writes', () => {
  it('repeated points and a wait at a crossing change nothing', () => {
    const plain = north(60)
    const twice = (values: Float64Array): Float64Array => Float64Array.from([...values].flatMap((v) => [v, v, v]))
    const repeated = { latRad: twice(plain.latRad), lonRad: twice(plain.lonRad), altM: twice(plain.altM) }
    expect(pieces(repeated, [], whole)).toEqual(pieces(plain, [], whole))
  })

  it('no number is lost on any road of random steps, some of no length', () => {
    const step = fc.tuple(
      fc.constantFrom(0, 1e-9, 1e-5, 1e-4, 1e-3),
      fc.double({ min: 0, max: 6.28, noNaN: true }),
      fc.double({ min: -5, max: 5, noNaN: true }),
    )
    fc.assert(
      fc.property(fc.array(step, { minLength: 2, maxLength: 60 }), fc.nat(1000), (steps, cut) => {
        const points = { latRad: [0.5], lonRad: [Math.PI], altM: [800] }
        for (const [size, turn, rise] of [...steps, [1e-4, 1, 0]]) {
          points.latRad.push(points.latRad[points.latRad.length - 1] + size * Math.cos(turn))
          points.lonRad.push(points.lonRad[points.lonRad.length - 1] + size * Math.sin(turn))
          points.altM.push(points.altM[points.altM.length - 1] + rise)
        }
        const road = {
          latRad: Float64Array.from(points.latRad),
          lonRad: Float64Array.from(points.lonRad),
          altM: Float64Array.from(points.altM),
        }
        const totalM = lengthOf(road)
        const made = pieces(road, [], { cutsM: [(totalM * cut) / 1000], lengthM: 1000 })
        for (const column of [made.lengthM, made.latRad, made.lonRad, made.altM, made.gradeRad, made.headingRad]) {
          expect(column.every(Number.isFinite)).toBe(true)
        }
        expect(sum(made.lengthM) / totalM).toBeCloseTo(1, 12)
        expect(Math.min(...made.lengthM)).toBeGreaterThan(0)
        expect(made.endAltM[made.count - 1]).toBeCloseTo(points.altM[points.altM.length - 1], 9)
      }),
    )
  })

  it('50,000 points are cut in a few milliseconds', () => {
    const points = winding(50_000)
    const tookMs = [1, 2, 3, 4, 5, 6, 7, 8].map(() => {
      const start = performance.now()
      pieces(points, [], whole)
      return performance.now() - start
    })
    // 4 to 8 ms on a shared two-core machine; the bound leaves room for a busy one.
    expect(Math.min(...tookMs)).toBeLessThan(40)
  })
})

describe('a wrong road is refused by name', () => {
  const points = north(50)
  const with_ = (change: Partial<RoadPoints>): RoadPoints => ({ ...points, ...change })
  const bad = (value: number): Float64Array => Float64Array.from(points.latRad, (v, i) => (i === 7 ? value : v))

  it.each([
    ['points', with_({ altM: new Float64Array(3) })],
    ['points', { latRad: Float64Array.of(1), lonRad: Float64Array.of(1), altM: Float64Array.of(1) }],
    ['points', with_({ latRad: new Float64Array(50) })],
    ['points.latRad[7]', with_({ latRad: bad(1.6) })],
    ['points.lonRad[7]', with_({ lonRad: bad(Number.NaN) })],
    ['points.altM[7]', with_({ altM: bad(20_000) })],
  ])('%s', (field, road) => {
    expect(() => pieces(road, [], whole)).toThrowError(expect.objectContaining({ field }))
  })

  it.each([
    ['stretches[0].fromM', { fromM: -1, toM: 10 }],
    ['stretches[0].fromM', { fromM: 1e6, toM: 2e6 }],
    ['stretches[0].toM', { fromM: 10, toM: 10 }],
    ['stretches[0].limitMps', { fromM: 0, toM: 10, limitMps: 0 }],
    ['stretches[0].surfaceFactor', { fromM: 0, toM: 10, surfaceFactor: Number.NaN }],
    ['stretches[0].haltsPerM', { fromM: 0, toM: 10, haltsPerM: -1 }],
  ])('%s', (field, stretch) => {
    expect(() => pieces(points, [stretch], whole)).toThrowError(expect.objectContaining({ field }))
  })

  it('cuts outside the road and pieces of no length', () => {
    expect(() => pieces(points, [], { cutsM: [1, 1e6], lengthM: 1000 })).toThrowError(/cutsM\[1\]: 1000000 given/)
    expect(() => pieces(points, [], { cutsM: [], lengthM: 0 })).toThrowError(/lengthM: 0 given/)
  })
})
