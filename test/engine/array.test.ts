import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  type ArrayHarvest,
  type ArrayModel,
  type ArraySteps,
  arrayHarvest,
  type Panel,
  prepareArray,
} from '../../server/engine/array.ts'
import { iamPhysical, martinRuizGround, martinRuizSky } from '../../server/engine/incidence.ts'
import { liftedNormal } from '../../server/engine/panel-light.ts'
import { aimAtSun, type Stand } from '../../server/engine/stand.ts'
import { offBest } from '../../server/engine/string-harvest.ts'
import { stringBest } from '../../server/engine/string.ts'
import type { StringModel } from '../../server/engine/substrings.ts'

const RAD = Math.PI / 180
const rack = { kind: 'faiman', u0: 25, u1: 6.84 } as const
const CELL = {
  lightA: 6.25,
  saturationA: 8.658679e-12,
  seriesOhm: 0.165 / 38,
  shuntOhm: 310 / 38,
  modifiedIdealityV: 1.015 / 38,
  currentCoefficientAPerC: 0.0026,
  bandGapEv: 1.121,
  bandGapPerC: -0.0002677,
}
const panel = (more: Partial<Panel> = {}): Panel => ({
  pitchRad: 0,
  rollRad: 0,
  lifts: true,
  cooling: rack,
  incidence: 'none',
  ...more,
})
const string = (groups: StringModel['groups'], more: Partial<StringModel> = {}): StringModel => ({
  name: 'string',
  cell: CELL,
  groups,
  cellsInParallel: 1,
  soilingFraction: 0,
  bypassV: 0.5,
  ...more,
})
const ROUND: Stand = {
  tiltMinRad: 0,
  tiltMaxRad: 90 * RAD,
  azimuthFromRad: 0,
  azimuthToRad: 2 * Math.PI,
  aim: 'at-sun',
  reaimS: 0,
}
const array = (more: Partial<ArrayModel> = {}): ArrayModel => ({
  panels: [panel()],
  stand: ROUND,
  strings: [string([{ panel: 0, cellsInSeries: 38 }])],
  albedo: 0,
  skyModel: 'hay-davies',
  ...more,
})

interface Instant {
  zenithDeg: number
  azimuthDeg: number
  dni: number
  dhi: number
  ghi: number
  headingDeg: number
  gradeDeg: number
  airSpeedMps: number
  lifted: boolean
}
const NOON: Instant = {
  zenithDeg: 30,
  azimuthDeg: 0,
  dni: 900,
  dhi: 100,
  ghi: 900 * Math.cos(30 * RAD) + 100,
  headingDeg: 0,
  gradeDeg: 0,
  airSpeedMps: 0,
  lifted: false,
}
function stepsOf(instants: Partial<Instant>[]): ArraySteps {
  const all = instants.map((each) => ({ ...NOON, ...each }))
  const column = (pick: (each: Instant) => number): Float64Array => Float64Array.from(all, pick)
  const level = (each: Instant): number => Math.sin(each.zenithDeg * RAD)
  return {
    weather: {
      sun: {
        east: column((each) => level(each) * Math.sin(each.azimuthDeg * RAD)),
        north: column((each) => level(each) * Math.cos(each.azimuthDeg * RAD)),
        up: column((each) => Math.cos(each.zenithDeg * RAD)),
      },
      apparentZenithRad: column((each) => each.zenithDeg * RAD),
      extraWm2: column(() => 1366.1),
      airMass: column((each) => 1 / Math.max(0.03, Math.cos(each.zenithDeg * RAD))),
      ghiWm2: column((each) => each.ghi),
      dniWm2: column((each) => each.dni),
      dhiWm2: column((each) => each.dhi),
      airC: column(() => 20),
    },
    headingRad: column((each) => each.headingDeg * RAD),
    gradeRad: column((each) => each.gradeDeg * RAD),
    airSpeedMps: column((each) => each.airSpeedMps),
    lifted: Uint8Array.from(all, (each) => (each.lifted ? 1 : 0)),
  }
}
const harvestOf = (model: ArrayModel, instants: Partial<Instant>[], exact = false): ArrayHarvest =>
  arrayHarvest(prepareArray(model), { ...stepsOf(instants), exact })

describe('light on the array', () => {
  // Source: by hand; on the level every sky model gives the diffuse light back, and there is no ground to see.
  it('is the global light on a level panel', () => {
    for (const skyModel of ['hay-davies', 'perez'] as const) {
      const { planeWm2, cellC } = harvestOf(array({ skyModel, albedo: 0.5 }), [{ airSpeedMps: 5 }])
      expect(planeWm2[0][0]).toBeCloseTo(NOON.ghi, 9)
      expect(cellC[0][0]).toBeCloseTo(20 + NOON.ghi / (25 + 6.84 * 5), 9)
    }
  })

  // Source: by hand: a climb of 30° south turns a flat panel square to a sun 30° from the zenith in the north.
  it('follows grade and heading', () => {
    const facing = harvestOf(array(), [{ headingDeg: 180, gradeDeg: 30, dhi: 0, ghi: 900 * Math.cos(30 * RAD) }])
    const away = harvestOf(array(), [{ headingDeg: 0, gradeDeg: 30, dhi: 0, ghi: 900 * Math.cos(30 * RAD) }])
    expect(facing.planeWm2[0][0]).toBeCloseTo(900, 9)
    expect(away.planeWm2[0][0]).toBeCloseTo(450, 9)
  })

  // Source: by hand from the published shares, nose panel at 20°: beam and light around the sun by angle, rest by tilt.
  it('loses beam and diffuse light at the cover, or only the beam where diffuse loses nothing', () => {
    const cos = Math.cos(50 * RAD)
    const aroundSun = (100 * (900 / 1366.1) * cos) / Math.cos(30 * RAD)
    const even = 100 * (1 - 900 / 1366.1) * 0.5 * (1 + Math.cos(20 * RAD))
    const ground = NOON.ghi * 0.3 * 0.5 * (1 - Math.cos(20 * RAD))
    const kept = iamPhysical(cos)
    const nose = { pitchRad: 20 * RAD, incidence: 'physical' } as const
    const at = [{ headingDeg: 180 }]
    const both = harvestOf(array({ panels: [panel(nose)], albedo: 0.3 }), at)
    const beamOnly = harvestOf(array({ panels: [panel({ ...nose, diffuseIncidence: 'none' })], albedo: 0.3 }), at)
    const tilt = Math.cos(20 * RAD)
    const wantBoth = (900 * cos + aroundSun) * kept + even * martinRuizSky(tilt) + ground * martinRuizGround(tilt)
    expect(Math.abs(both.effectiveWm2[0][0] / wantBoth - 1)).toBeLessThan(1e-8)
    expect(Math.abs(beamOnly.effectiveWm2[0][0] / (900 * cos * kept + aroundSun + even + ground) - 1)).toBeLessThan(
      1e-8,
    )
    expect(Math.abs(both.planeWm2[0][0] / (900 * cos + aroundSun + even + ground) - 1)).toBeLessThan(1e-12)
  })

  it('is no light and exactly 0 W at night, never NaN', () => {
    const night = { zenithDeg: 110, dni: 0, dhi: 0, ghi: 0 }
    for (const skyModel of ['hay-davies', 'perez'] as const)
      for (const exact of [false, true]) {
        const panels = [panel(), panel({ pitchRad: 0.2, incidence: 'physical' })]
        const strings = [
          string([{ panel: 0, cellsInSeries: 38 }]),
          string([
            { panel: 0, cellsInSeries: 20 },
            { panel: 1, cellsInSeries: 18 },
          ]),
        ]
        const got = harvestOf(
          array({ panels, strings, skyModel, albedo: 0.2 }),
          [night, { ...night, lifted: true }],
          exact,
        )
        expect(got.bestW.map((each) => [...each])).toEqual([
          [0, 0],
          [0, 0],
        ])
        expect(got.bestV.map((each) => [...each]).flat()).toEqual([0, 0, 0, 0])
        expect([...got.cellC[1]]).toEqual([20, 20])
        expect([...got.planeWm2[0], ...got.planeWm2[1], ...got.effectiveWm2[1]]).toEqual([0, 0, 0, 0, 0, 0])
      }
  })

  it('is the same harvest when sun, heading, roll and stand are mirrored east for west', () => {
    const deg = (least: number, most: number) => fc.double({ min: least, max: most, noNaN: true })
    let [counted, lit] = [0, 0]
    fc.assert(
      fc.property(
        fc.tuple(deg(0, 88), deg(0, 360), deg(0, 360), deg(-5, 5), deg(-20, 20), deg(-15, 15)),
        fc.boolean(),
        fc.constantFrom<'hay-davies' | 'perez'>('hay-davies', 'perez'),
        ([zenithDeg, azimuthDeg, headingDeg, gradeDeg, pitch, roll], lifted, skyModel) => {
          const side = (sign: 1 | -1): ArrayHarvest => {
            const [from, to] = sign === 1 ? [20, 110] : [-110, -20]
            const stand = { ...ROUND, tiltMaxRad: 60 * RAD, azimuthFromRad: from * RAD, azimuthToRad: to * RAD }
            const panels = [panel({ pitchRad: pitch * RAD, rollRad: sign * roll * RAD, incidence: 'physical' })]
            return harvestOf(array({ panels, stand, skyModel, albedo: 0.2 }), [
              { zenithDeg, gradeDeg, lifted, azimuthDeg: sign * azimuthDeg, headingDeg: sign * headingDeg },
            ])
          }
          const [east, west] = [side(1), side(-1)]
          expect(Math.abs(east.bestW[0][0] - west.bestW[0][0])).toBeLessThan(1e-9 * (1 + east.bestW[0][0]))
          counted++
          if (east.bestW[0][0] > 10) lit++
        },
      ),
      { numRuns: 400 },
    )
    expect(counted).toBe(400)
    expect(lit).toBeGreaterThan(300)
  })
})

describe('the lifted array', () => {
  it('faces the sun where the stand allows it, and then gets all of the beam', () => {
    for (const [zenithDeg, azimuthDeg] of [
      [75, 80],
      [40, 300],
      [5, 181],
    ]) {
      const beam = { zenithDeg, azimuthDeg, dhi: 0, ghi: 900 * Math.cos(zenithDeg * RAD), headingDeg: 33, gradeDeg: 4 }
      const got = harvestOf(array(), [
        { ...beam, lifted: true },
        { ...beam, lifted: false },
      ])
      expect(got.planeWm2[0][0]).toBeCloseTo(900, 9)
      expect(got.aimTiltRad[0]).toBeCloseTo(zenithDeg * RAD, 12)
      expect(got.aimAzimuthRad[0]).toBeCloseTo(azimuthDeg * RAD, 12)
      expect([got.aimTiltRad[1], got.aimAzimuthRad[1]]).toEqual([Number.NaN, Number.NaN])
    }
  })

  // Source: by hand: sun at 60° from the zenith, due east; the stand turns from north-west to north-east, 50° at most.
  it('stops at the limits of tilt and azimuth', () => {
    const stand: Stand = { ...ROUND, tiltMaxRad: 50 * RAD, azimuthFromRad: 315 * RAD, azimuthToRad: 405 * RAD }
    const east = aimAtSun(stand, Math.sin(60 * RAD), 0, 0.5)
    expect(east.azimuthRad).toBeCloseTo(45 * RAD, 12)
    expect(east.tiltRad).toBeCloseTo(50 * RAD, 12)
    const south = aimAtSun(stand, 0, -Math.sin(60 * RAD), 0.5)
    expect(south.tiltRad).toBe(0)
    const low = aimAtSun({ ...stand, tiltMinRad: 10 * RAD }, 0, Math.sin(3 * RAD), Math.cos(3 * RAD))
    expect(low.tiltRad).toBeCloseTo(10 * RAD, 12)
    expect(aimAtSun({ ...stand, azimuthToRad: 315 * RAD }, 0.6, 0, 0.8).azimuthRad).toBeCloseTo(315 * RAD, 12)
  })

  it('never gets less beam than any other pose that the stand allows', () => {
    const share = fc.double({ min: 0, max: 1, noNaN: true })
    let counted = 0
    fc.assert(
      fc.property(fc.array(share, { minLength: 7, maxLength: 7 }), (s) => {
        const tiltMinRad = s[0] * 0.6
        const tiltMaxRad = tiltMinRad + s[1] * (Math.PI / 2 - tiltMinRad)
        const stand = {
          ...ROUND,
          tiltMinRad,
          tiltMaxRad,
          azimuthFromRad: s[2] * 7,
          azimuthToRad: s[2] * 7 + s[3] * 6.28,
        }
        const zenith = s[4] * 1.55
        const azimuth = s[5] * 6.28
        const cosAt = (tilt: number, at: number): number =>
          Math.cos(tilt) * Math.cos(zenith) + Math.sin(tilt) * Math.sin(zenith) * Math.cos(at - azimuth)
        const sun = [Math.sin(zenith) * Math.sin(azimuth), Math.sin(zenith) * Math.cos(azimuth), Math.cos(zenith)]
        const aim = aimAtSun(stand, sun[0], sun[1], sun[2])
        for (let k = 0; k <= 8; k++)
          for (let j = 0; j <= 8; j++) {
            const other = cosAt(
              tiltMinRad + (k / 8) * (tiltMaxRad - tiltMinRad),
              stand.azimuthFromRad + (j / 8) * (stand.azimuthToRad - stand.azimuthFromRad),
            )
            expect(cosAt(aim.tiltRad, aim.azimuthRad)).toBeGreaterThanOrEqual(other - 1e-12)
          }
        counted++
      }),
      { numRuns: 500 },
    )
    expect(counted).toBe(500)
  })

  // Source: by hand: the array of a car heading north, tilted 90° towards east; its nose panel leans on it by 10°.
  it('keeps pitch and roll of lifting panels on it, and leaves the others on the car', () => {
    const nose = liftedNormal({ pitchRad: 10 * RAD, rollRad: 0 }, 0, 90 * RAD, 90 * RAD)
    const want = [Math.cos(10 * RAD), Math.sin(10 * RAD), 0]
    nose.forEach((part, i) => expect(part).toBeCloseTo(want[i], 12))
    const leaning = liftedNormal({ pitchRad: 10 * RAD, rollRad: 0 }, 0, 40 * RAD, 0)
    const wantLeaning = [0, Math.sin(50 * RAD), Math.cos(50 * RAD)]
    leaning.forEach((part, i) => expect(part).toBeCloseTo(wantLeaning[i], 12))
    const panels = [panel(), panel({ lifts: false })]
    const got = harvestOf(array({ panels }), [{ zenithDeg: 60, dhi: 0, ghi: 450, lifted: true }])
    expect(got.planeWm2[0][0]).toBeCloseTo(900, 9)
    expect(got.planeWm2[1][0]).toBeCloseTo(450, 9)
  })

  it('comes down again: the step after is that of a car that was never lifted', () => {
    const instants = [{ headingDeg: 70 }, { headingDeg: 70, lifted: true }, { headingDeg: 70 }]
    const [power] = harvestOf(array({ panels: [panel({ pitchRad: 0.1, incidence: 'physical' })] }), instants).bestW
    expect(power[2]).toBe(power[0])
    expect(power[1]).toBeGreaterThan(power[0])
  })
})

describe('the strings of the array', () => {
  const panels = [panel(), panel({ pitchRad: 25 * RAD })]
  const spanning = string([
    { panel: 0, cellsInSeries: 20 },
    { panel: 1, cellsInSeries: 18 },
  ])
  const strings = [string([{ panel: 0, cellsInSeries: 38 }]), string([{ panel: 1, cellsInSeries: 38 }]), spanning]

  it('read their panel’s light and warmth, dust and rows; equal strings give the same, tables within 0.04 % of exact', () => {
    const instants = [{ headingDeg: 20 }, { headingDeg: 200 }, { zenithDeg: 80, dni: 200, dhi: 40, ghi: 75 }]
    const dusty = string([{ panel: 1, cellsInSeries: 20 }], { cellsInParallel: 2, soilingFraction: 0.07 })
    const model = array({ panels, strings: [...strings, { ...strings[1], name: 'twin' }, dusty] })
    const table = harvestOf(model, instants)
    const exact = harvestOf(model, instants, true)
    expect(table.bestW[3]).toEqual(table.bestW[1])
    expect(table.bestV[3]).toEqual(table.bestV[1])
    expect(exact.bestW[0]).not.toEqual(exact.bestW[1])
    model.strings.forEach((each, s) =>
      instants.forEach((_, i) => {
        const best = stringBest(
          each,
          table.effectiveWm2.map((p) => p[i]),
          table.cellC.map((p) => p[i]),
        )
        expect(Math.abs(exact.bestW[s][i] / best.W - 1)).toBeLessThan(1e-12)
        expect(Math.abs(exact.bestV[s][i] / best.V - 1)).toBeLessThan(1e-12)
        expect(Math.abs(table.bestW[s][i] / best.W - 1)).toBeLessThan(4e-4)
        expect(Math.abs(table.bestV[s][i] / best.V - 1)).toBeLessThan(4e-4)
      }),
    )
  })

  it('give less when a tracker holds them off their best voltage', () => {
    const prepared = prepareArray(array({ panels, strings }))
    const harvest = arrayHarvest(prepared, { ...stepsOf([{}]), exact: true })
    strings.forEach((_, s) => {
      const [best, volts] = [harvest.bestW[s][0], harvest.bestV[s][0]]
      expect(Math.abs(offBest(prepared, s, harvest).atV(0, volts) / best - 1)).toBeLessThan(1e-9)
      expect(offBest(prepared, s, harvest).atV(0, 0.9 * volts)).toBeLessThan(best)
      expect(offBest(prepared, s, harvest).atV(0, 1.1 * volts)).toBeLessThan(best)
      expect(offBest(prepared, s, harvest).atV(0, 2 * volts)).toBe(0)
    })
  })

  it('give most between two voltages at a hill’s top or an edge, and there what they give when held', () => {
    const prepared = prepareArray(array({ panels, strings }))
    const harvest = arrayHarvest(prepared, stepsOf([{}, { dni: 300, ghi: 360 }]))
    strings.forEach((_, s) => {
      const [string, other] = [offBest(prepared, s, harvest), offBest(prepared, s, harvest)]
      const [best, volts] = [harvest.bestW[s][0], harvest.bestV[s][0]]
      const topV = string.bestBetweenV(0, 0.5 * volts, 2 * volts)
      expect(Math.abs(topV / volts - 1)).toBeLessThan(1e-3)
      expect(Math.abs(string.atV(0, topV) / best - 1)).toBeLessThan(4e-4)
      expect(string.atV(0, topV)).toBeCloseTo(other.atV(0, topV), 3)
      expect(string.atV(1, topV)).toBe(other.atV(1, topV))
      expect(string.atV(1, topV)).not.toBeCloseTo(best, 1)
      expect(string.bestBetweenV(1, 1.1 * volts, 2 * volts)).toBe(1.1 * volts)
    })
  })
})

describe('a wrong array', () => {
  const one = array().strings[0]
  const CASES: [string, Partial<ArrayModel>, RegExp][] = [
    ['albedo', { albedo: 1.2 }, /^albedo: is 1.2, expected 0 to 1$/],
    ['albedo', { albedo: Number.NaN }, /^albedo: is NaN, expected 0 to 1$/],
    ['pitch', { panels: [panel({ pitchRad: 2 })] }, /^panels\[0\].pitchRad: is 2 rad, expected -1.57/],
    ['roll', { panels: [panel(), panel({ rollRad: -3 })] }, /^panels\[1\].rollRad: is -3 rad/],
    ['cooling', { panels: [panel({ cooling: { ...rack, u0: 0 } })] }, /^panels\[0\].cooling.u0: is 0 W/],
    ['stand', { stand: { ...ROUND, tiltMinRad: 1, tiltMaxRad: 0.5 } }, /^stand.tiltMaxRad: is 0.5 rad, expected 1 to/],
    [
      'panel',
      { strings: [string([{ panel: 3, cellsInSeries: 4 }])] },
      /groups\[0\].panel: is 3, expected one of 1 panels/,
    ],
    [
      'cells',
      { strings: [string([{ panel: 0, cellsInSeries: 2.5 }])] },
      /cellsInSeries: is 2.5, expected a whole number/,
    ],
    ['groups', { strings: [string([])] }, /^strings\[0\].groups: is empty/],
    [
      'dust',
      { strings: [one, { ...one, soilingFraction: -0.1 }] },
      /^strings\[1\].soilingFraction: is -0.1, expected 0 to 1$/,
    ],
    ['cell', { strings: [{ ...one, cell: { ...CELL, saturationA: 0 } }] }, /^strings\[0\].cell.saturationA: is 0 A/],
  ]

  it('is refused with the field, its value and what was expected', () => {
    for (const [name, more, message] of CASES) expect(() => prepareArray(array(more)), name).toThrow(message)
    expect(CASES.length).toBe(11)
  })

  it('is refused when lifted without a stand, or with steps that do not match the weather', () => {
    expect(() => harvestOf(array({ stand: null }), [{ lifted: true }])).toThrow(/^lifted: .*no stand/)
    const steps = { ...stepsOf([{}, {}]), gradeRad: new Float64Array(1) }
    expect(() => arrayHarvest(prepareArray(array()), steps)).toThrow(/^gradeRad: has 1 steps, expected 2/)
  })
})
