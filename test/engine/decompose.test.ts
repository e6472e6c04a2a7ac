import { describe, expect, it } from 'vitest'
import { cloudTransmission, cloudySky, erbs, erbsDiffuseShare } from '../../server/engine/decompose.ts'
import { referenceRows } from '../support/reference.ts'

const RAD = Math.PI / 180

describe('Erbs’ split of global irradiance', () => {
  // pvlib-python's tests, after Erbs et al. 1982
  it.each([
    { ghi: 50, zenithDeg: 85, clearness: 0.405724, dni: 96.72, dhi: 41.57 },
    { ghi: 1000, zenithDeg: 10, clearness: 0.718133, dni: 794.21, dhi: 217.86 },
  ])('is the published one for $ghi W/m² at zenith $zenithDeg', ({ ghi, zenithDeg, clearness, dni, dhi }) => {
    const extraWm2 = ghi / (clearness * Math.cos(zenithDeg * RAD))
    const split = erbs(ghi, zenithDeg * RAD, extraWm2)
    expect(split.dni).toBeCloseTo(dni, 1)
    expect(split.dhi).toBeCloseTo(dhi, 1)
  })

  // Erbs et al. 1982, eq. 1, computed
  it.each([
    [0.2, 0.982],
    [0.4, 0.84],
    [0.6, 0.439],
    [0.8, 0.165],
    [0.95, 0.165],
  ])('gives clearness %s the diffuse share %s', (clearness, share) => {
    expect(erbsDiffuseShare(clearness)).toBeCloseTo(share, 3)
  })

  it('agrees with every row of the reference table within 1e-8', () => {
    // test/reference/sky.csv: pvlib-python 0.11.2, fed the table's own GHI, geometric zenith and extraterrestrial
    const rows = referenceRows('sky.csv').map((row) =>
      Object.fromEntries(Object.entries(row).map(([name, text]) => [name, Number(text)])),
    )
    let withBeam = 0
    for (const row of rows) {
      const split = erbs(row.ghi_given, row.zenith_deg * RAD, row.dni_extra)
      expect(Math.abs(split.dni - row.erbs_dni), `row ${row.id}`).toBeLessThan(1e-8 * Math.max(row.erbs_dni, 1))
      expect(Math.abs(split.dhi - row.erbs_dhi), `row ${row.id}`).toBeLessThan(1e-8 * Math.max(row.erbs_dhi, 1))
      if (row.erbs_dni > 0) withBeam++
    }
    expect(rows.length).toBe(179)
    expect(withBeam).toBeGreaterThan(100)
  })
})

describe('clouds', () => {
  const clear = { ghi: 812.3, dni: 871.9, dhi: 97.1 }

  // Kasten & Czeplak 1980, Solar Energy 24, 177: 1 - 0.75 (N/8)^3.4, computed
  it.each([
    [4, 0.929],
    [6, 0.718],
    [7, 0.5237],
    [8, 0.25],
  ])('of %s oktas let %s of the global irradiance through', (oktas, share) => {
    expect(cloudTransmission(oktas / 8)).toBeCloseTo(share, 4)
    expect(cloudySky(clear, oktas / 8).ghi / clear.ghi).toBeCloseTo(share, 4)
  })

  it('of cover 0 leave exactly the clear sky', () => {
    expect(cloudySky(clear, 0)).toEqual(clear)
  })

  it('of cover 1 leave no beam, all of it diffuse', () => {
    const covered = cloudySky(clear, 1)
    expect(covered.dni).toBe(0)
    expect(covered.dhi).toBeCloseTo(0.25 * clear.ghi, 9)
  })

  it('keep beam and diffuse adding up to global at any cover', () => {
    const cosZenith = (clear.ghi - clear.dhi) / clear.dni
    for (let cloud = 0; cloud <= 1; cloud += 0.05) {
      const sky = cloudySky(clear, cloud)
      expect(sky.dni * cosZenith + sky.dhi).toBeCloseTo(sky.ghi, 9)
    }
  })
})
