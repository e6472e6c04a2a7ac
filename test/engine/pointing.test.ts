import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { arrayHarvest, type ArrayModel, type ArrayHarvest, prepareArray } from '../../server/engine/array.ts'
import { clearSkyWm2, relativeAirMass } from '../../server/engine/clear-sky.ts'
import { horizon } from '../../server/engine/horizon.ts'
import { holdsAlong } from '../../server/engine/pointing.ts'
import { apartRad } from '../../server/engine/pose-search.ts'
import { aimAtSun, arcRad, type Pose, type Stand } from '../../server/engine/stand.ts'
import {
  ANY_POSE,
  anyArray,
  anyMoment,
  anyStand,
  array,
  CANOPY,
  EXTRA_WM2,
  ghiOf,
  liftedSteps,
  lightOf,
  type Moment,
  panel,
  powersW,
  powerW,
  RAD,
  string,
  SUN,
} from './pointing-scenes.ts'

const poseAt = ({ aimTiltRad, aimAzimuthRad }: ArrayHarvest, i = 0): Pose => ({
  tiltRad: aimTiltRad[i],
  azimuthRad: aimAzimuthRad[i],
})
const poseOf = (model: ArrayModel, moments: Moment[]): Pose =>
  poseAt(arrayHarvest(prepareArray(model), liftedSteps(moments, true)))

/** Poses over all of a stand's range. */
function gridOf(stand: Stand, gapRad: number): Pose[] {
  const span = (from: number, width: number): number[] => {
    const parts = Math.max(1, Math.ceil(width / gapRad))
    return Array.from({ length: parts + 1 }, (_, i) => from + (width * i) / parts)
  }
  const azimuths = span(stand.azimuthFromRad, arcRad(stand))
  return span(stand.tiltMinRad, stand.tiltMaxRad - stand.tiltMinRad).flatMap((tiltRad) =>
    azimuths.map((azimuthRad) => ({ tiltRad, azimuthRad })),
  )
}

describe('the best pose', () => {
  // Source: the closed form of stand.ts, whose own test is by hand.
  it('is that of the sun’s beam where there is nothing else', () => {
    let counted = 0
    fc.assert(
      fc.property(anyStand, anyMoment, (stand, moment) => {
        const at = { ...moment, dni: 800, dhi: 0 }
        const level = Math.sin(at.zenithDeg * RAD)
        const sun = [level * Math.sin(at.azimuthDeg * RAD), level * Math.cos(at.azimuthDeg * RAD)] as const
        const want = aimAtSun(stand, ...sun, Math.cos(at.zenithDeg * RAD))
        const got = poseOf(array({ stand }), [at])
        const [gets, would] = powersW(array({ stand }), at, [got, want])
        expect(gets).toBeGreaterThanOrEqual(would * (1 - 1e-6))
        if (would < 20) return
        expect(apartRad(got, want) / RAD).toBeLessThan(0.1)
        counted++
      }),
      { numRuns: 300, seed: 12 },
    )
    expect(counted).toBeGreaterThan(220)
  })

  // Source: by hand: beam and light around the sun pull along the sun, half the dome less half the ground pulls up;
  // a flat panel without losses gets n·v and a constant, so the best normal is v over its length.
  it('is where sun, dome and ground together pull, for one step or for the sum of a hold', () => {
    let [counted, notAtSun] = [0, 0]
    fc.assert(
      fc.property(fc.array(anyMoment, { minLength: 1, maxLength: 12 }), fc.nat(60), (moments, albedoPct) => {
        const albedo = albedoPct / 100
        const hold = moments.map((each, i) => ({
          ...moments[0],
          azimuthDeg: moments[0].azimuthDeg + 2 * i,
          zenithDeg: Math.min(80, moments[0].zenithDeg + i),
          dni: each.dni,
          dhi: each.dhi,
        }))
        const pull = { east: 0, north: 0, up: 0 }
        for (const each of hold) {
          const cos = Math.cos(each.zenithDeg * RAD)
          const share = each.dni / EXTRA_WM2
          const along = each.dni + (each.dhi * share) / cos
          const level = along * Math.sin(each.zenithDeg * RAD)
          pull.east += level * Math.sin(each.azimuthDeg * RAD)
          pull.north += level * Math.cos(each.azimuthDeg * RAD)
          pull.up += along * cos + 0.5 * (each.dhi * (1 - share) - albedo * ghiOf(each))
        }
        const want = {
          tiltRad: Math.atan2(Math.hypot(pull.east, pull.north), pull.up),
          azimuthRad: Math.atan2(pull.east, pull.north),
        }
        const sun = { tiltRad: hold[0].zenithDeg * RAD, azimuthRad: hold[0].azimuthDeg * RAD }
        // Further off, the sun of some step would stand behind the panel and no longer pull; tilts end at 90°.
        if (apartRad(want, sun) > 60 * RAD || want.tiltRad > 88 * RAD) return
        expect(apartRad(poseOf(array({ albedo }), hold), want) / RAD).toBeLessThan(0.1)
        counted++
        if (apartRad(want, sun) > 5 * RAD) notAtSun++
      }),
      { numRuns: 400, seed: 13 },
    )
    expect(counted).toBeGreaterThan(280)
    expect(notAtSun).toBeGreaterThan(80)
  })

  // Source: by hand: a dome alone gives (1 + cos β)/2 and the ground ρ(1 − cos β)/2, which falls with tilt for ρ < 1.
  it('is flat under an even overcast, wherever the sun hides', () => {
    for (const albedo of [0, 0.2, 0.6])
      for (const incidence of ['none', 'martin-ruiz', 'physical'] as const)
        for (const tiltMinRad of [0, 12 * RAD]) {
          const stand = { ...ANY_POSE, tiltMinRad }
          const overcast = { ...SUN, dni: 0, dhi: 250 }
          const got = poseOf(array({ albedo, stand, panels: [panel({ incidence })] }), [overcast])
          expect(Math.abs(got.tiltRad - tiltMinRad) / RAD, `${albedo} ${incidence}`).toBeLessThan(0.1)
        }
  })

  it('goes from the sun to flat as cloud comes before it', () => {
    const tilts = [800, 400, 200, 100, 50, 0].map(
      (dni) => poseOf(array({ albedo: 0.2 }), [{ ...SUN, dni, dhi: 150 }]).tiltRad / RAD,
    )
    for (let i = 1; i < tilts.length; i++) expect(tilts[i]).toBeLessThan(tilts[i - 1])
    expect(tilts[0]).toBeGreaterThan(55)
    expect(tilts[5]).toBeLessThan(0.1)
  })

  // Source: worked values of an independent library: turbidity 3 at sea level, Hay and Davies, ground 0.2.
  it('gains 1.96, 3.46 and 4.64 times the light of a flat array under a clear sky at zenith 60, 75 and 80°', () => {
    for (const [zenithDeg, gain] of [
      [60, 1.96],
      [75, 3.46],
      [80, 4.64],
    ]) {
      const apparentZenithRad = zenithDeg * RAD
      const airMass = relativeAirMass(apparentZenithRad)
      const sky = clearSkyWm2({ apparentZenithRad, airMass, linke: 3, altM: 0, extraWm2: EXTRA_WM2 })
      const moment = { ...SUN, zenithDeg, dni: sky.dni, dhi: sky.dhi }
      const model = array({ albedo: 0.2 })
      const atSun = { tiltRad: zenithDeg * RAD, azimuthRad: SUN.azimuthDeg * RAD }
      const best = arrayHarvest(prepareArray(model), liftedSteps([moment])).planeWm2[0][0]
      const aim = { tiltRad: Float64Array.of(atSun.tiltRad), azimuthRad: Float64Array.of(atSun.azimuthRad) }
      const facing = arrayHarvest(prepareArray(model), { ...liftedSteps([moment]), aim }).planeWm2[0][0]
      expect(Math.abs(facing / ghiOf(moment) - gain)).toBeLessThan(0.0052)
      expect(best / facing).toBeGreaterThanOrEqual(1 - 1e-9)
      expect(best / facing).toBeLessThan(1.001)
    }
  })

  // The best tenth of a per cent is the bound that is stated; a rare sky between two hills is further off.
  it('is beaten by a fine grid by less than 0.001 % in 98 of 100 cases, and by 0.1 % of the power in none', () => {
    for (const [steepDeg, worstLight] of [
      [20, 5e-4],
      [45, 5e-4],
    ]) {
      const [power, light]: [number[], number[]] = [[], []]
      fc.assert(
        fc.property(anyArray(steepDeg), anyMoment, (model, moment) => {
          const poses = gridOf(model.stand ?? ANY_POSE, 5 * RAD)
          const own = poseOf(model, [moment])
          const [ownW, ...others] = powersW(model, moment, [own, ...poses])
          power.push(Math.max(...others) / ownW - 1)
          const worth = lightOf(model, moment)
          light.push(poses.reduce((so, pose) => Math.max(so, worth(pose)), 0) / worth(own) - 1)
        }),
        { numRuns: 200, seed: 2 },
      )
      for (const losses of [power, light]) losses.sort((one, other) => one - other)
      expect(power.length).toBe(200)
      expect(light[195]).toBeLessThan(1e-5)
      expect(light[199]).toBeLessThan(worstLight)
      expect(power[195]).toBeLessThan(1e-5)
      expect(power[199]).toBeLessThan(1e-3)
    }
  })

  it('serves strings that span panels within 0.02 % of their power in 98 of 100 cases', () => {
    const losses: number[] = []
    fc.assert(
      fc.property(anyArray(15), anyMoment, (model, moment) => {
        const all = model.panels.map((_, p) => ({ panel: p, cellsInSeries: 20 + 10 * p }))
        const spanning = {
          ...model,
          strings: [string(all)],
          panels: model.panels.map((each) => ({ ...each, lifts: true })),
        }
        const poses = gridOf(model.stand ?? ANY_POSE, 10 * RAD)
        const [ownW, ...others] = powersW(spanning, moment, [poseOf(spanning, [moment]), ...poses])
        losses.push(Math.max(0, Math.max(...others) / ownW - 1))
      }),
      { numRuns: 300, seed: 3 },
    )
    losses.sort((one, other) => one - other)
    expect(losses.length).toBe(300)
    // Two hills of nearly one height may be taken for each other.
    expect(losses[299]).toBeLessThan(1e-2)
    expect(losses[294]).toBeLessThan(2e-4)
  })

  it('never gives more within tighter limits', () => {
    let counted = 0
    const share = fc.array(fc.noBias(fc.integer({ min: 0, max: 1000 })), { minLength: 4, maxLength: 4 })
    fc.assert(
      fc.property(anyArray(25), anyMoment, share, (model, moment, [low, high, left, right]) => {
        const wide = model.stand ?? ANY_POSE
        const [tilts, arc] = [wide.tiltMaxRad - wide.tiltMinRad, arcRad(wide)]
        const tight = {
          ...wide,
          tiltMinRad: wide.tiltMinRad + (tilts * low) / 2000,
          tiltMaxRad: wide.tiltMaxRad - (tilts * high) / 2000,
          azimuthFromRad: wide.azimuthFromRad + (arc * left) / 2100,
          azimuthToRad: wide.azimuthFromRad + arc - (arc * right) / 2100,
        }
        const [wideW, tightW] = [wide, tight].map((stand) => {
          const own = { ...model, stand }
          return lightOf(own, moment)(poseOf(own, [moment]))
        })
        // The search's own bound.
        expect(tightW).toBeLessThanOrEqual(wideW * (1 + 5e-4))
        counted++
      }),
      { numRuns: 300, seed: 6 },
    )
    expect(counted).toBe(300)
  })

  // By hand: with the sun behind a wall all round, only the dome is left, and the dome is best seen flat.
  it('is flat behind a wall that hides the sun, and at the sun where the wall is lower', () => {
    const hazy = { ...SUN, zenithDeg: 60, dni: 600, dhi: 120 }
    const under = (heightRad: number): number => {
      const of = [horizon('horizon', [{ azimuthRad: 0, heightRad }])]
      const steps = { ...liftedSteps([hazy]), horizons: { of, at: new Int32Array(1) } }
      return poseAt(arrayHarvest(prepareArray(array()), steps)).tiltRad / RAD
    }
    expect(under(40 * RAD)).toBeLessThan(0.1)
    expect(under(20 * RAD)).toBeGreaterThan(54)
  })

  it('is within 0.1 % of the best of a fine grid under the car’s own shade too', () => {
    let [worst, counted] = [0, 0]
    fc.assert(
      fc.property(anyArray(10), anyMoment, (bare, moment) => {
        const model = { ...bare, panels: bare.panels.map((each) => ({ ...each, shade: CANOPY })) }
        const light = lightOf(model, moment)
        const most = gridOf(model.stand ?? ANY_POSE, 5 * RAD).reduce((so, pose) => Math.max(so, light(pose)), 0)
        worst = Math.max(worst, most / light(poseOf(model, [moment])) - 1)
        counted++
      }),
      { numRuns: 150, seed: 4 },
    )
    expect(counted).toBe(150)
    expect(worst).toBeLessThan(1e-3)
  })

  it('is the pose of the sun’s beam where the stand is told so, under overcast too', () => {
    const stand = { ...ANY_POSE, aim: 'at-sun' as const }
    const got = poseOf(array({ stand }), [{ ...SUN, dni: 0, dhi: 250 }])
    expect(got.tiltRad / RAD).toBeCloseTo(60, 9)
    expect(got.azimuthRad / RAD).toBeCloseTo(70, 9)
  })

  it('is a pose, not NaN, in the dark and where no panel lifts', () => {
    const dark = poseOf(array(), [{ ...SUN, zenithDeg: 95, dni: 0, dhi: 0 }])
    const still = poseOf(array({ panels: [panel({ lifts: false })] }), [SUN])
    for (const { tiltRad, azimuthRad } of [dark, still]) {
      expect(tiltRad).toBeGreaterThanOrEqual(0)
      expect(tiltRad).toBeLessThanOrEqual(ANY_POSE.tiltMaxRad)
      expect(Number.isFinite(azimuthRad)).toBe(true)
    }
  })
})

describe('a hold', () => {
  const steps = (minutes: number, upFromMin: number) => ({
    count: minutes,
    fromMs: Float64Array.from({ length: minutes }, (_, i) => i * 60_000),
    atMs: Float64Array.from({ length: minutes }, (_, i) => (i + 0.5) * 60_000),
    span: new Int32Array(minutes),
    lifted: Uint8Array.from({ length: minutes }, (_, i) => (i >= upFromMin && i < minutes - 2 ? 1 : 0)),
  })

  it('lasts its time from when the array is up, and ends when it comes down', () => {
    const holds = holdsAlong(steps(30, 3), 600)
    expect([...holds].map((hold) => (hold < 0 ? '-' : hold)).join('')).toBe('---0000000000111111111122222--')
    const all = steps(9, 1)
    all.span.fill(1, 5)
    expect([...holdsAlong(all, 86_400)]).toEqual([-1, 0, 0, 0, 0, 1, 1, -1, -1])
    expect([...holdsAlong(all, 0)]).toEqual([-1, 0, 1, 2, 3, 4, 5, -1, -1])
  })

  it('has one pose, and never gives more when it is longer', () => {
    const morning = Array.from({ length: 120 }, (_, i) => ({
      ...SUN,
      zenithDeg: 85 - i / 4,
      azimuthDeg: 80 - i / 8,
      dni: 300 + 4 * i,
      dhi: 60 + i / 2,
    }))
    const got = [0, 5, 10, 20, 60, 120].map((minutes) => {
      const hold = Int32Array.from(morning, (_, i) => (minutes === 0 ? i : Math.floor(i / minutes)))
      const harvest = arrayHarvest(prepareArray(array({ albedo: 0.2 })), { ...liftedSteps(morning), hold })
      const poses = new Set(morning.map((_, i) => `${harvest.aimTiltRad[i]} ${harvest.aimAzimuthRad[i]}`))
      expect(poses.size).toBe(minutes === 0 ? 120 : 120 / minutes)
      return morning.reduce((sum, _, i) => sum + powerW(harvest, i), 0)
    })
    for (let i = 1; i < got.length; i++) expect(got[i]).toBeLessThan(got[i - 1])
    // By hand: over ten minutes the sun moves 2.5°; up to 1.25° off a beam loses 1 − cos, 0.008 % in the mean.
    expect(1 - got[2] / got[0]).toBeLessThan(1e-4)
    // One pose for two hours loses the mean of 1 − cos over ±15°: 1.1 %.
    expect(1 - got[5] / got[0]).toBeGreaterThan(0.004)
    expect(1 - got[5] / got[0]).toBeLessThan(0.015)
  })
})
