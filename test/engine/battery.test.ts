import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  chargeAtStoredJ,
  chargeLimitW,
  dischargeLimitW,
  newPackStep,
  packNow,
  openCircuitV,
  type PackInput,
  preparePack,
  stepPack,
  storedJ,
} from '../../server/engine/battery.ts'
import { InputError } from '../../server/engine/input-error.ts'

// An invented pack, 30 cells in series and 14 in parallel: 3.35 Ah and 45 mΩ a cell, 20 mΩ of leads.
const CHARGE = [0, 0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 0.95, 1]
const CELL_V = [2.8, 3.1, 3.28, 3.45, 3.54, 3.6, 3.66, 3.76, 3.86, 3.97, 4.07, 4.12, 4.19]
const INPUT: PackInput = {
  capacityC: 14 * 3.35 * 3600,
  ocv: { charge: Float64Array.from(CHARGE), V: Float64Array.from(CELL_V, (v) => 30 * v) },
  resistanceOhm: (30 * 0.045) / 14 + 0.02,
  chargeMaxV: 126,
  dischargeMinV: 75,
  chargeMaxA: 47,
  dischargeMaxA: 90,
  coulombicEfficiency: 1,
}
const pack = preparePack(INPUT)

describe('the 30s14p pack, worked by hand: I = (V − √(V² − 4RP))/2R', () => {
  it('holds 46.9 Ah and 5165 Wh behind 0.1164 Ω, on 3.671 V a cell', () => {
    expect(pack.capacityC / 3600).toBeCloseTo(46.9, 9)
    expect(pack.resistanceOhm).toBeCloseTo(0.1164, 4)
    expect(Math.abs(storedJ(pack, 1) / 3600 - 5165)).toBeLessThan(0.5)
    expect(storedJ(pack, 1) / pack.capacityC / 30).toBeCloseTo(3.671, 3)
  })

  it('gives 1500 W at 13.865 A and 108.186 V and loses 22.38 W, 3000 W for 92.35 W', () => {
    expect(openCircuitV(pack, 0.5)).toBeCloseTo(109.8, 9)
    const step = stepPack(pack, packNow(pack, 0.5), -1500, 1e-3)
    expect(step.currentA).toBeCloseTo(-13.865, 3)
    expect(step.terminalV).toBeCloseTo(108.186, 3)
    expect(step.lossJ / 1e-3).toBeCloseTo(22.38, 2)
    expect(stepPack(pack, packNow(pack, 0.5), -3000, 1e-3).lossJ / 1e-3).toBeCloseTo(92.35, 2)
  })

  it('takes 1000 W at 9.021 A and loses 9.475 W', () => {
    const step = stepPack(pack, packNow(pack, 0.5), 1000, 1e-3)
    expect(step.currentA).toBeCloseTo(9.021, 3)
    expect(step.lossJ / 1e-3).toBeCloseTo(9.475, 3)
  })

  it('tapers to 2597 W at 95 % and 1234 W at 98 %, the terminals at 126 V', () => {
    expect(Math.abs(chargeLimitW(pack, packNow(pack, 0.95), 0) - 2597)).toBeLessThan(0.5)
    expect(Math.abs(chargeLimitW(pack, packNow(pack, 0.98), 0) - 1234)).toBeLessThan(0.5)
    expect(stepPack(pack, packNow(pack, 0.98), 2000, 0)).toMatchObject({ limit: 'charge-voltage', terminalV: 126 })
  })

  it('keeps 8.36, 17.5, 46.7 and 77.8 % of its energy below 10, 20, 50 and 80 % of its charge', () => {
    const belowPct = (charge: number): number => (100 * storedJ(pack, charge)) / storedJ(pack, 1)
    expect(belowPct(0.1)).toBeCloseTo(8.36, 2)
    expect(belowPct(0.2)).toBeCloseTo(17.5, 1)
    expect(belowPct(0.5)).toBeCloseTo(46.7, 1)
    expect(belowPct(0.8)).toBeCloseTo(77.8, 1)
  })
})

it('a counter that is off by 0.1 A loses 1.92 % of the charge in nine hours: some 99 Wh', () => {
  const share = (0.1 * 9 * 3600) / pack.capacityC
  expect(share * 100).toBeCloseTo(1.92, 2)
  expect((storedJ(pack, 0.5 + share / 2) - storedJ(pack, 0.5 - share / 2)) / 3600).toBeCloseTo(99, 0)
})

describe('limits have names', () => {
  it('a full pack spills all of what comes', () => {
    const step = stepPack(pack, packNow(pack, 1), 800, 60)
    expect(step).toEqual({
      charge: 1,
      currentA: 0,
      endA: 0,
      terminalV: openCircuitV(pack, 1),
      lossJ: 0,
      spilledJ: 48_000,
      shortJ: 0,
      limit: 'full',
    })
  })

  it('an empty pack is short of all that is asked', () => {
    expect(stepPack(pack, packNow(pack, 0), -800, 60)).toMatchObject({
      charge: 0,
      shortJ: 48_000,
      limit: 'empty',
      lossJ: 0,
    })
  })

  it.each([
    ['charge-current', 0.5, 9000, {}],
    ['charge-voltage', 0.97, 4000, {}],
    ['full', 0.9999, 1200, {}],
    ['discharge-current', 0.5, -12_000, {}],
    ['discharge-voltage', 0.08, -9000, { dischargeMinV: 90 }],
    ['empty', 0.001, -1500, {}],
    ['discharge-power', 0.5, -40_000, { dischargeMinV: 0, dischargeMaxA: 1000 }],
  ])('%s', (limit, charge, powerW, change) => {
    const limited = preparePack({ ...INPUT, ...change })
    const durationS = limit === 'empty' || limit === 'full' ? 600 : 10
    const step = stepPack(limited, packNow(limited, charge), powerW, durationS)
    expect(step.limit).toBe(limit)
    const boundW =
      powerW > 0
        ? chargeLimitW(limited, packNow(limited, charge), durationS)
        : -dischargeLimitW(limited, packNow(limited, charge), durationS)
    if (limit === 'charge-voltage') expect(step.spilledJ).toBeLessThan((powerW - boundW) * durationS)
    else expect(step.spilledJ - step.shortJ).toBeCloseTo((powerW - boundW) * durationS, 6)
    expect(Math.abs(stepPack(limited, packNow(limited, charge), boundW * 0.999, durationS).currentA)).toBeLessThan(
      Math.abs(step.currentA),
    )
    expect(stepPack(limited, packNow(limited, charge), boundW * 0.999, durationS).limit).toBeNull()
  })

  it('the most a pack can give at one instant is V²/4R', () => {
    const bare = preparePack({ ...INPUT, dischargeMinV: 0, dischargeMaxA: 1000 })
    expect(dischargeLimitW(bare, packNow(bare, 0.5), 0)).toBeCloseTo(109.8 ** 2 / 4 / pack.resistanceOhm, 6)
  })

  it.each([
    ['charge-voltage', 0.55, 60_000, 126],
    ['discharge-voltage', 0.45, -60_000, 90],
  ])('a long step across several points of the OCV table ends at the limit: %s', (limit, charge, powerW, endV) => {
    const strong = preparePack({ ...INPUT, chargeMaxA: 1000, dischargeMaxA: 1000, dischargeMinV: 90 })
    const step = stepPack(strong, packNow(strong, charge), powerW, 600)
    expect(step.limit).toBe(limit)
    expect(Math.abs(step.charge - charge)).toBeGreaterThan(0.15)
    expect(openCircuitV(strong, step.charge) + step.endA * strong.resistanceOhm).toBeCloseTo(endV, 9)
  })

  it('ten minutes of taper follow the exponential that the straight OCV line gives, whatever the steps', () => {
    // dq/dt = (126 − U(q))/(R·C) with U = 123.6 + 42·(q − 0.95): q → 0.95 + 2.4/42, rate 42/(R·C). By hand.
    const endCharge = 0.95 + 2.4 / 42
    const exact = endCharge + (0.95 - endCharge) * Math.exp((-42 * 600) / (pack.resistanceOhm * pack.capacityC))
    const exactJ = storedJ(pack, exact) - storedJ(pack, 0.95)
    for (const [stepS, withinWh] of [
      [600, 0.69],
      [60, 0.69],
      [1, 0.14],
    ] as const) {
      let charge = 0.95
      for (let t = 0; t < 600; t += stepS) charge = stepPack(pack, packNow(pack, charge), 2700, stepS).charge
      const lessWh = (exactJ - (storedJ(pack, charge) - storedJ(pack, 0.95))) / 3600
      expect(lessWh).toBeGreaterThan(0)
      expect(lessWh).toBeLessThan(withinWh)
    }
  })
})

describe('energy closes', () => {
  const step = newPackStep()
  it('stored after less before is power in, less loss and spill, plus shortage, to 1e-9', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.double({ min: -15_000, max: 15_000, noNaN: true }),
        fc.double({ min: 0.1, max: 3600, noNaN: true }),
        fc.double({ min: 0.9, max: 1, noNaN: true }),
        (charge, powerW, durationS, coulombicEfficiency) => {
          const own = preparePack({ ...INPUT, coulombicEfficiency })
          stepPack(own, packNow(own, charge), powerW, durationS, step)
          const gainJ = storedJ(own, step.charge) - storedJ(own, charge)
          const namedJ = powerW * durationS - step.lossJ - step.spilledJ + step.shortJ
          // 1e-9 of the energy moved, and the last digits of a stored energy of 19 MJ.
          expect(Math.abs(gainJ - namedJ)).toBeLessThan(1e-9 * Math.abs(powerW * durationS) + 2e-8)
          expect(Math.min(step.lossJ, step.spilledJ, step.shortJ)).toBeGreaterThanOrEqual(0)
          expect(step.charge).toBeGreaterThanOrEqual(0)
          expect(step.charge).toBeLessThanOrEqual(1)
          if (powerW > 0)
            expect(openCircuitV(own, step.charge) + step.endA * own.resistanceOhm).toBeLessThan(126 + 1e-9)
        },
      ),
      { numRuns: 3000 },
    )
  })

  it('with a weak cell, resistance by charge and temperature and limits by temperature it closes too, and no cell leaves its window', () => {
    const tableOf = (a: number[]) => ({
      charge: Float64Array.of(0, 0.3, 1),
      tempC: Float64Array.of(-20, 10, 50),
      factor: Float64Array.from(a),
    })
    const share = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    fc.assert(
      fc.property(
        share(0, 1),
        share(-12_000, 12_000),
        share(0.1, 600),
        share(-25, 65),
        fc.record({ capacityDeficit: share(0, 0.3), chargeOffset: share(-0.2, 0.2), extraResistance: share(0, 2) }),
        fc.array(share(0.5, 5), { minLength: 9, maxLength: 9 }),
        (charge, powerW, durationS, tempC, weak, factors) => {
          const own = preparePack({
            ...INPUT,
            leadsOhm: 0.02,
            coulombicEfficiency: 0.995,
            ohmFactor: tableOf(factors),
            weakest: { inSeries: 30, ...weak },
            chargeWindow: { minC: 0, fullFromC: 10, fullToC: 40, maxC: 45 },
            dischargeWindow: { minC: -20, fullFromC: -5, fullToC: 50, maxC: 60 },
          })
          const now = packNow(own, charge, tempC)
          const groupOhm = [...now.groupOhm]
          stepPack(own, now, powerW, durationS, step)
          const gainJ = storedJ(own, step.charge) - storedJ(own, charge)
          const namedJ = powerW * durationS - step.lossJ - step.spilledJ + step.shortJ
          expect(Math.abs(gainJ - namedJ)).toBeLessThan(1e-9 * Math.abs(powerW * durationS) + 2e-8)
          expect(Math.min(step.lossJ, step.spilledJ, step.shortJ)).toBeGreaterThanOrEqual(0)
          // Parts of a tapered step take the resistance of their own start: within the table's range, so only short
          // steps are held to their cells' windows with the resistance of the step's start.
          if (durationS > 5 || step.currentA === 0) return
          own.groups.forEach(({ ocv }, g) => {
            const i = ocv.charge.findLastIndex((x) => x <= step.charge)
            const next = Math.min(i + 1, ocv.V.length - 1)
            const part = next === i ? 0 : (step.charge - ocv.charge[i]) / (ocv.charge[next] - ocv.charge[i])
            const cellV = ocv.V[i] + part * (ocv.V[next] - ocv.V[i]) + step.endA * groupOhm[g]
            if (powerW > 0) expect(cellV).toBeLessThan(4.2 + 1e-9)
            else expect(cellV).toBeGreaterThan(2.5 - 1e-9)
          })
        },
      ),
      { numRuns: 3000 },
    )
  })

  it('a round trip never gives more than it took, and colder cells with more resistance give less', () => {
    const cold = {
      charge: Float64Array.of(0),
      tempC: Float64Array.of(0, 25),
      factor: Float64Array.of(2.5, 1),
    }
    const own = preparePack({ ...INPUT, coulombicEfficiency: 0.995, ohmFactor: cold })
    const back = (powerW: number, tempC: number): number => {
      stepPack(own, packNow(own, 0.4, tempC), powerW, 1800, step)
      const kept = (storedJ(own, step.charge) - storedJ(own, 0.4)) / (powerW * 1800)
      const { charge } = step
      stepPack(own, packNow(own, charge, tempC), -powerW, 1800, step)
      return (kept * powerW * 1800) / (storedJ(own, charge) - storedJ(own, step.charge))
    }
    for (const powerW of [300, 1000, 2500]) {
      expect(back(powerW, 25)).toBeLessThan(1)
      expect(back(powerW, 0)).toBeLessThan(back(powerW, 25))
    }
    // 1000 W: 98.5–99.1 % each way and 99.5 % of the charge; domain practice 96–98 % for a round trip.
    expect(back(1000, 25)).toBeGreaterThan(0.95)
  })

  it('a day of random steps adds up: loss is I²R and the charge that did not stay', () => {
    const own = preparePack({ ...INPUT, coulombicEfficiency: 0.995 })
    let charge = 0.5
    let inJ = 0
    for (let i = 0; i < 2000; i++) {
      const powerW = 1500 * Math.sin(i * 1.7) - 100
      stepPack(own, packNow(own, charge), powerW, 30, step)
      const heatJ = step.currentA ** 2 * own.resistanceOhm * 30
      const ocvV = step.terminalV - step.currentA * own.resistanceOhm
      const lostChargeJ = powerW > 0 ? 0.005 * step.currentA * ocvV * 30 : 0
      expect(step.lossJ).toBeCloseTo(heatJ + lostChargeJ, 8)
      inJ += powerW * 30 - step.lossJ
      charge = step.charge
    }
    expect(storedJ(own, charge) - storedJ(own, 0.5)).toBeCloseTo(inJ, 4)
  })

  it('the state of charge found from an energy holds that energy', () => {
    for (let i = 0; i <= 1000; i++) {
      expect(chargeAtStoredJ(pack, storedJ(pack, i / 1000))).toBeCloseTo(i / 1000, 12)
    }
    expect(chargeAtStoredJ(pack, -5)).toBe(0)
    expect(chargeAtStoredJ(pack, 1e12)).toBe(1)
  })

  it('energy below a charge is the area under the OCV line, summed in ten thousand slices', () => {
    let sumJ = 0
    for (let i = 0; i < 10_000; i++) sumJ += (pack.capacityC * openCircuitV(pack, (i + 0.5) / 10_000)) / 10_000
    expect(storedJ(pack, 1) / sumJ).toBeCloseTo(1, 9)
  })
})

describe('a wrong pack is refused by name', () => {
  it.each([
    ['pack.capacityC', { capacityC: 0 }],
    ['pack.resistanceOhm', { resistanceOhm: Number.NaN }],
    ['pack.coulombicEfficiency', { coulombicEfficiency: 1.01 }],
    ['pack.dischargeMinV', { dischargeMinV: 130 }],
    ['pack.ocv', { ocv: { charge: Float64Array.of(0, 1), V: Float64Array.of(100) } }],
    ['pack.ocv.charge', { ocv: { charge: Float64Array.of(0, 0.9), V: Float64Array.of(100, 120) } }],
    ['pack.ocv.V[1]', { ocv: { charge: Float64Array.of(0, 1), V: Float64Array.of(100, 90) } }],
  ])('%s', (field, change) => {
    expect(() => preparePack({ ...INPUT, ...change })).toThrowError(expect.objectContaining({ field }))
    expect(() => preparePack({ ...INPUT, ...change })).toThrowError(InputError)
  })

  it('a step from an impossible charge or with no number for power', () => {
    expect(() => stepPack(pack, packNow(pack, 1.2), 0, 1)).toThrowError(/charge: 1.2 given, 0..1 expected/)
    expect(() => stepPack(pack, packNow(pack, 0.5), Number.NaN, 1)).toThrowError(/powerW/)
    expect(() => stepPack(pack, packNow(pack, 0.5), 0, -1)).toThrowError(/durationS/)
  })
})
