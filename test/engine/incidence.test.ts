import { describe, expect, it } from 'vitest'
import {
  beamShare,
  beamShareAt,
  iamAshrae,
  iamMartinRuiz,
  iamPhysical,
  incidenceTable,
  martinRuizGround,
  martinRuizSky,
} from '../../server/engine/incidence.ts'
import { referenceRows } from '../support/reference.ts'

const cosDeg = (deg: number): number => Math.cos((deg * Math.PI) / 180)

describe('light lost at a slanting cover', () => {
  // Source: test/reference/plane.csv, computed by the independent library that its head names.
  it('keeps the tabulated share of beam, sky and ground on 300 planes', () => {
    let counted = 0
    for (const row of referenceRows('plane.csv')) {
      const cos = Number(row.cos_aoi)
      const near = (got: number, column: string): void =>
        expect(Math.abs(got - Number(row[column])), `case ${row.case} ${column} ${got}`).toBeLessThan(1e-7)
      near(iamPhysical(cos), 'iam_physical')
      near(iamAshrae(cos), 'iam_ashrae')
      near(iamMartinRuiz(cos), 'iam_martin_ruiz')
      near(martinRuizSky(cosDeg(Number(row.tilt_deg))), 'mr_iam_sky')
      near(martinRuizGround(cosDeg(Number(row.tilt_deg))), 'mr_iam_ground')
      counted++
    }
    expect(counted).toBe(300)
  })

  // Source: published tests of pvlib-python (snapshot 6382338); Martin–Ruiz at 60..85° computed from its formula.
  it('meets the published shares at 45° and the steep end', () => {
    expect(iamAshrae(cosDeg(45))).toBeCloseTo(0.979289, 6)
    expect(iamPhysical(cosDeg(45))).toBeCloseTo(0.987978, 6)
    expect(iamMartinRuiz(cosDeg(45))).toBeCloseTo(0.98987, 6)
    const steep = [60, 70, 80, 85].map((deg) => iamMartinRuiz(cosDeg(deg)).toFixed(4))
    expect(steep).toEqual(['0.9579', '0.8838', '0.6635', '0.4208'])
    expect(martinRuizSky(cosDeg(30))).toBeCloseTo(0.95497, 5)
    expect(martinRuizGround(cosDeg(30))).toBeCloseTo(0.79444, 5)
  })

  it('keeps everything head-on and nothing from behind', () => {
    for (const law of ['physical', 'ashrae', 'martin-ruiz', 'none'] as const) {
      expect(beamShare(law, 1)).toBeCloseTo(1, 14)
      expect(beamShare(law, 0)).toBe(0)
      expect(beamShare(law, -0.5)).toBe(0)
    }
    expect([martinRuizSky(-1), martinRuizGround(1)]).toEqual([0, 0])
  })

  it('reads the same from its table, to 1e-7 for glass and where the law bends sharply to 1e-3 of a grazing beam', () => {
    const WORST = { none: 0, physical: 1e-7, 'martin-ruiz': 1e-7, ashrae: 7e-4 } as const
    for (const law of ['none', 'physical', 'martin-ruiz', 'ashrae'] as const) {
      const table = incidenceTable(law)
      let worst = 0
      for (let cos = 1e-5; cos <= 1; cos += 1.37e-5)
        worst = Math.max(worst, Math.abs(beamShareAt(table, cos) - beamShare(law, cos)))
      worst = Math.max(worst, Math.abs(beamShareAt(table, 1) - 1))
      expect(worst, law).toBeLessThanOrEqual(WORST[law])
    }
  })
})
