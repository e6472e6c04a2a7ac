import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { openCircuitV, packNow, type PackInput, preparePack, stepPack, storedJ } from '../../server/engine/battery.ts'
import { ohmFactor } from '../../server/engine/ohm-factor.ts'
import { idleC, type PackHeat, warmedC } from '../../server/engine/pack-heat.ts'
import { chargeAtRest } from '../../server/engine/rest-voltage.ts'
import { shareAllowed } from '../../server/engine/temperature-window.ts'

const number = (min: number, max: number) => fc.double({ min, max, noNaN: true })

/** Two cells in series: 1 Ah, 3.0 to 4.0 V in a straight line, 0.1 Ω each. */
const TWO: PackInput = {
  capacityC: 3600,
  ocv: { charge: Float64Array.of(0, 1), V: Float64Array.of(6, 8) },
  resistanceOhm: 0.2,
  chargeMaxV: 8.4,
  dischargeMinV: 5,
  chargeMaxA: 10,
  dischargeMaxA: 10,
  coulombicEfficiency: 1,
}
const weakest = (change: Partial<NonNullable<PackInput['weakest']>> = {}) => ({
  inSeries: 2,
  capacityDeficit: 0,
  chargeOffset: 0,
  extraResistance: 0,
  ...change,
})

describe('two cells in series, one of them weak, worked by hand', () => {
  // A cell 20 % smaller, full with the other: 0.8 Ah come out, the other still holds 0.2 Ah at 3.2 V.
  const small = preparePack({ ...TWO, weakest: weakest({ capacityDeficit: 0.2 }) })

  it('a cell 20 % smaller leaves 0.8 Ah and 3.2 + 3.0 V where it is empty', () => {
    expect(small.capacityC / 3600).toBeCloseTo(0.8, 12)
    expect(openCircuitV(small, 0)).toBeCloseTo(6.2, 12)
    expect(openCircuitV(small, 1)).toBeCloseTo(8, 12)
    // Mean 3.6 V of the other over 0.8 Ah, mean 3.5 V of the small one: 5.68 Wh.
    expect(storedJ(small, 1) / 3600).toBeCloseTo(0.8 * 7.1, 12)
    expect(stepPack(small, packNow(small, 0), -5, 60)).toMatchObject({ limit: 'weakest-cell', shortJ: 300 })
  })

  it('a cell 10 % of the charge behind ends the discharge, and the other ends the charge', () => {
    const behind = preparePack({ ...TWO, weakest: weakest({ chargeOffset: 0.1 }) })
    expect(behind.capacityC / 3600).toBeCloseTo(0.9, 12)
    expect(openCircuitV(behind, 0)).toBeCloseTo(3.1 + 3, 12)
    expect(openCircuitV(behind, 1)).toBeCloseTo(4 + 3.9, 12)
    expect(stepPack(behind, packNow(behind, 0), -5, 60).limit).toBe('weakest-cell')
    expect(stepPack(behind, packNow(behind, 1), 5, 60)).toMatchObject({ limit: 'full', spilledJ: 300 })
  })

  it('a cell 10 % of the charge ahead ends the charge, and the other ends the discharge', () => {
    const ahead = preparePack({ ...TWO, weakest: weakest({ chargeOffset: -0.1 }) })
    expect(ahead.capacityC / 3600).toBeCloseTo(0.9, 12)
    expect(openCircuitV(ahead, 0)).toBeCloseTo(3 + 3.1, 12)
    expect(openCircuitV(ahead, 1)).toBeCloseTo(3.9 + 4, 12)
    expect(stepPack(ahead, packNow(ahead, 1), 5, 60).limit).toBe('fullest-cell')
    expect(stepPack(ahead, packNow(ahead, 0), -5, 60).limit).toBe('empty')
  })

  it('a cell of twice the resistance reaches its floor first: 3.5 − 0.2·I = 2.5 at 5 A, the terminals then at 5.5 V', () => {
    const tired = preparePack({ ...TWO, weakest: weakest({ extraResistance: 1 }) })
    const step = stepPack(tired, packNow(tired, 0.5), -100, 0)
    expect(step.limit).toBe('weakest-cell')
    expect(step.currentA).toBeCloseTo(-5, 12)
    expect(step.terminalV).toBeCloseTo(7 - 5 * 0.3, 12)
    // 6 A would leave the terminals at 5.2 V, above their 5 V, and the cell at 2.3 V: 31.2 W asked, 27.5 W given.
    const within = stepPack(tired, packNow(tired, 0.5), -6 * (7 - 6 * 0.3), 1e-6)
    expect(within).toMatchObject({ limit: 'weakest-cell', currentA: expect.closeTo(-5, 6) })
    expect(within.shortJ / 1e-6).toBeCloseTo(31.2 - 27.5, 4)
    // Charging: 3.5 + 0.2·I = 4.2 at 3.5 A while the other stands at 3.85 V.
    const filling = stepPack(tired, packNow(tired, 0.5), 100, 0)
    expect(filling.limit).toBe('fullest-cell')
    expect(filling.currentA).toBeCloseTo(3.5, 12)
    expect(filling.terminalV).toBeCloseTo(4.2 + 3.85, 12)
  })

  it('a floor of 3.25 V a cell is reached at a quarter of the charge: 0.75 Ah stay usable', () => {
    const floored = preparePack({ ...TWO, dischargeMinV: 6.5 })
    expect(floored.capacityC / 3600).toBeCloseTo(0.75, 12)
    expect(openCircuitV(floored, 0)).toBeCloseTo(6.5, 12)
    expect(storedJ(floored, 1) / 3600).toBeCloseTo(0.75 * 7.25, 12)
    const both = preparePack({ ...TWO, dischargeMinV: 6.5, weakest: weakest({ capacityDeficit: 0.2 }) })
    // The small cell stands at 3.25 V with a quarter of its 0.8 Ah: 0.6 Ah come out.
    expect(both.capacityC / 3600).toBeCloseTo(0.6, 12)
  })

  it('a weaker cell never gives more usable energy', () => {
    fc.assert(
      fc.property(number(0, 0.4), number(0, 0.2), number(0, 0.3), number(0, 0.2), (deficit, offset, more, further) => {
        const usableJ = (d: number, o: number) =>
          storedJ(preparePack({ ...TWO, weakest: weakest({ capacityDeficit: d, chargeOffset: o }) }), 1)
        const is = usableJ(deficit, offset)
        expect(usableJ(deficit + more, offset)).toBeLessThanOrEqual(is + 1e-9)
        expect(usableJ(deficit, offset + further)).toBeLessThanOrEqual(is + 1e-9)
        expect(usableJ(0, -offset - further)).toBeLessThanOrEqual(usableJ(0, -offset) + 1e-9)
      }),
      { numRuns: 500 },
    )
  })

  it('a cell like the others changes nothing', () => {
    const alike = preparePack({ ...TWO, weakest: weakest() })
    const plain = preparePack(TWO)
    for (const [charge, powerW, s] of [
      [0.5, 20, 60],
      [0.99, 70, 600],
      [0.02, -30, 60],
      [0.3, -12, 1],
    ]) {
      const one = stepPack(alike, packNow(alike, charge), powerW, s)
      const other = stepPack(plain, packNow(plain, charge), powerW, s)
      expect(one.charge).toBeCloseTo(other.charge, 12)
      expect(one.lossJ).toBeCloseTo(other.lossJ, 9)
      expect(one.spilledJ - one.shortJ).toBeCloseTo(other.spilledJ - other.shortJ, 9)
    }
  })
})

describe('resistance by charge and temperature', () => {
  // Rows at 0, 50 and 100 % of charge; columns at 0 and 25 °C.
  const table = {
    charge: Float64Array.of(0, 0.5, 1),
    tempC: Float64Array.of(0, 25),
    factor: Float64Array.of(4, 2, 2, 1, 3, 1.2),
  }

  it('is bilinear between its points and keeps its edge beyond', () => {
    expect(ohmFactor(table, 0.5, 25)).toBe(1)
    expect(ohmFactor(table, 0, 0)).toBe(4)
    expect(ohmFactor(table, 0.25, 12.5)).toBeCloseTo((4 + 2 + 2 + 1) / 4, 12)
    expect(ohmFactor(table, 0.9, 5)).toBeCloseTo(0.8 * (0.2 * 2 + 0.8 * 3) + 0.2 * (0.2 * 1 + 0.8 * 1.2), 12)
    expect(ohmFactor(table, 0.5, -30)).toBe(2)
    expect(ohmFactor(table, 1, 60)).toBe(1.2)
    const one = { charge: Float64Array.of(0.4), tempC: Float64Array.of(20), factor: Float64Array.of(1.7) }
    expect(ohmFactor(one, 0.9, -5)).toBe(1.7)
  })

  it('the cells’ part follows it, the leads do not; a weak cell at its own charge', () => {
    const pack = preparePack({ ...TWO, resistanceOhm: 0.25, leadsOhm: 0.05, ohmFactor: table })
    expect(packNow(pack, 0.5, 25).ohm).toBeCloseTo(0.25, 12)
    expect(packNow(pack, 0.5, 0).ohm).toBeCloseTo(0.05 + 0.4, 12)
    const weak = preparePack({ ...TWO, ohmFactor: table, weakest: weakest({ capacityDeficit: 0.5 }) })
    // Empty: the other cell at half charge (factor 1), the small one at none (factor 2): 0.1 + 0.2 Ω.
    expect(packNow(weak, 0, 25).ohm).toBeCloseTo(0.3, 12)
  })

  it('the heat is I²R with it: 2 A through 0.4 Ω at 0 °C lose 1.6 W', () => {
    const pack = preparePack({ ...TWO, ohmFactor: table })
    const step = stepPack(pack, packNow(pack, 0.5, 0), -2 * (7 - 2 * 0.4), 0.001)
    expect(step.currentA).toBeCloseTo(-2, 4)
    expect(step.lossJ / 0.001).toBeCloseTo(1.6, 3)
  })

  it('more resistance never stores more of the same charge, nor leaves more after the same discharge', () => {
    let counted = 0
    fc.assert(
      fc.property(number(0.01, 0.99), number(-40, 60), number(0.01, 0.5), number(1, 4), (charge, powerW, ohm, more) => {
        const after = (resistanceOhm: number) => {
          const pack = preparePack({ ...TWO, resistanceOhm })
          const step = stepPack(pack, packNow(pack, charge), powerW, 60)
          return { J: storedJ(pack, step.charge), shortJ: step.shortJ }
        }
        const high = after(ohm * more)
        // A pack that cannot give what is asked draws less current and may lose less.
        if (high.shortJ > 0) return
        counted++
        expect(high.J).toBeLessThanOrEqual(after(ohm).J + 1e-6)
      }),
      { numRuns: 1000 },
    )
    expect(counted).toBeGreaterThan(600)
  })
})

describe('current by temperature', () => {
  // Charging at 0–45 °C as data sheets of lithium-ion cells commonly have it, less below 10 and above 40 °C.
  const window = { minC: 0, fullFromC: 10, fullToC: 40, maxC: 45 }

  it('is none outside, all between, in straight lines on both sides', () => {
    const shares = [-0.1, 0, 2.5, 10, 25, 40, 42, 45, 45.1].map((tempC) => shareAllowed(window, tempC))
    expect(shares).toEqual([0, 0, 0.25, 1, 1, 1, 0.6, 0, 0])
    const hard = { minC: 0, fullFromC: 0, fullToC: 45, maxC: 45 }
    expect([-0.01, 0, 45, 45.01].map((tempC) => shareAllowed(hard, tempC))).toEqual([0, 1, 1, 0])
  })

  const pack = preparePack({ ...TWO, chargeMaxA: 2, chargeWindow: window, dischargeWindow: { ...window, minC: -20 } })

  it.each([
    ['too-cold-to-charge', -1, 20, 0],
    ['too-cold-to-charge', 5, 20, 1],
    ['charge-current', 20, 20, 2],
    ['too-hot-to-charge', 42.5, 20, 1],
    ['too-cold-to-discharge', -25, -20, 0],
    ['too-hot-to-discharge', 50, -20, 0],
  ])('%s at %d °C', (limit, tempC, powerW, ampere) => {
    const step = stepPack(pack, packNow(pack, 0.5, tempC), powerW, 10)
    expect(step.limit).toBe(limit)
    expect(Math.abs(step.currentA)).toBeCloseTo(ampere, 12)
    expect(step.spilledJ + step.shortJ).toBeCloseTo(Math.abs(powerW * 10 - step.currentA * step.terminalV * 10), 9)
  })

  it('colder never allows more below the full range, hotter never more above', () => {
    fc.assert(
      fc.property(number(-60, 40), number(0, 30), number(10, 90), (cold, by, hot) => {
        expect(shareAllowed(window, cold - by)).toBeLessThanOrEqual(shareAllowed(window, cold))
        expect(shareAllowed(window, hot + by)).toBeLessThanOrEqual(shareAllowed(window, hot))
      }),
    )
  })
})

describe('the pack as one warm body, by hand', () => {
  const heat: PackHeat = { capacityJPerC: 25_000, movingWPerC: 10, parkedWPerC: 4 }

  it('90 W into 10 W/°C end 9 °C above the air, 63.2 % of the way after 2500 s', () => {
    const body = { startC: 30, airC: 30, heatW: 90, isMoving: true }
    expect(warmedC(heat, body, 1e6)).toBeCloseTo(39, 9)
    expect(warmedC(heat, body, 2500)).toBeCloseTo(30 + 9 * (1 - Math.exp(-1)), 12)
    expect(warmedC(heat, { ...body, isMoving: false }, 1e6)).toBeCloseTo(52.5, 9)
  })

  it('without loss to the air 25 kJ warm it by 1 °C', () => {
    const closed = { ...heat, movingWPerC: 0 }
    const body = { startC: 20, airC: -5, heatW: 50, isMoving: true }
    expect(warmedC(closed, body, 500)).toBeCloseTo(21, 12)
    expect(warmedC({ ...heat, movingWPerC: 5e-324 }, body, 500)).toBeCloseTo(21, 12)
  })

  it('does not depend on the length of the steps', () => {
    let tempC = 15
    for (let i = 0; i < 100; i++) tempC = warmedC(heat, { startC: tempC, airC: 28, heatW: 60, isMoving: true }, 36)
    expect(tempC).toBeCloseTo(warmedC(heat, { startC: 15, airC: 28, heatW: 60, isMoving: true }, 3600), 10)
  })

  it('keeps what it was given: warmth gained is heat less what the air took', () => {
    // dT/dt summed in a hundred thousand Euler steps, an independent way.
    let tempC = 40
    let toAirJ = 0
    const dt = 0.1
    for (let i = 0; i < 100_000; i++) {
      const outW = 4 * (tempC - 10)
      toAirJ += outW * dt
      tempC += ((70 - outW) * dt) / heat.capacityJPerC
    }
    expect(warmedC(heat, { startC: 40, airC: 10, heatW: 70, isMoving: false }, 10_000)).toBeCloseTo(tempC, 3)
    expect((tempC - 40) * heat.capacityJPerC).toBeCloseTo(70 * 10_000 - toAirJ, 3)
  })

  it('over night follows air that falls evenly, as ten thousand small steps do', () => {
    const hours = 12
    const last = { packC: 35, airC: 28, atMs: 0 }
    let tempC = 35
    const steps = 10_000
    for (let i = 0; i < steps; i++) {
      const airC = 28 + ((10 - 28) * (i + 0.5)) / steps
      tempC = warmedC(heat, { startC: tempC, airC, heatW: 0, isMoving: false }, (hours * 3600) / steps)
    }
    const morning = idleC(heat, last, { airC: 10, atMs: hours * 3_600_000 })
    expect(morning).toBeCloseTo(tempC, 6)
    expect(morning).toBeGreaterThan(10)
    expect(idleC(heat, last, { airC: 10, atMs: 0 })).toBe(35)
  })
})

describe('a rested voltage', () => {
  const flat = preparePack({
    ...TWO,
    ocv: { charge: Float64Array.of(0, 0.2, 0.8, 1), V: Float64Array.of(6, 7, 7, 8) },
  })
  const plain = preparePack(TWO)

  it('stands for the charge of the table, and a meter’s error for a range', () => {
    const found = chargeAtRest(plain, 7.5, 0.05)
    expect(found?.charge).toBeCloseTo(0.75, 12)
    expect(found?.low).toBeCloseTo(0.725, 12)
    expect(found?.high).toBeCloseTo(0.775, 12)
    expect(chargeAtRest(plain, 8, 0.1)).toMatchObject({ charge: 1, high: 1 })
  })

  it('on the flat says its middle and all of it', () => {
    expect(chargeAtRest(flat, 7, 0)).toEqual({ charge: 0.5, low: 0.2, high: 0.8 })
    const wide = chargeAtRest(flat, 7, 0.1)
    expect(wide?.low).toBeCloseTo(0.18, 12)
    expect(wide?.high).toBeCloseTo(0.82, 12)
  })

  it('outside the table is no charge', () => {
    expect(chargeAtRest(plain, 5.99, 0.1)).toBeNull()
    expect(chargeAtRest(plain, 8.01, 0.1)).toBeNull()
  })

  it('of any pack with a weak cell is the voltage of the charge found', () => {
    fc.assert(
      fc.property(number(0, 0.3), number(-0.2, 0.2), number(0, 1), (capacityDeficit, chargeOffset, charge) => {
        const pack = preparePack({ ...TWO, weakest: weakest({ capacityDeficit, chargeOffset }) })
        const found = chargeAtRest(pack, openCircuitV(pack, charge), 0.02)
        expect(found?.charge).toBeCloseTo(charge, 9)
        expect(found?.low).toBeLessThan(charge + 1e-12)
        expect(found?.high).toBeGreaterThan(charge - 1e-12)
      }),
    )
  })
})
