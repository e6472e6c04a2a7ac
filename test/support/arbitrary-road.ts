import fc from 'fast-check'
import type { CarInput } from '../../server/documents/car.ts'

/** Even over the range; fc.double is even over the digits, so mostly next to 0. */
const number = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + ((max - min) * n) / 1e6)

/** What a body may say of tyres and slanting wind, often nothing. */
export const anyAir: fc.Arbitrary<Partial<CarInput['body']>> = fc
  .record({
    rollingPctPerC: fc.constantFrom(0, 0.86, 3),
    rollingPerKmh: fc.constantFrom(0, 0.00001),
    factors: fc.option(fc.array(number(0.5, 3), { minLength: 1, maxLength: 4 }), { nil: undefined }),
  })
  .map(({ factors, ...rest }) => ({
    ...rest,
    ...(factors === undefined
      ? {}
      : { dragByYaw: [1, ...factors].map((factor, i) => ({ yawDeg: (i * 90) / factors.length, factor })) }),
  }))

const terms = fc.record({
  controllerW: number(0, 50),
  frictionNm: number(0, 2),
  eddyNmPerKrpm: number(0, 1),
  phaseOhm: number(0, 0.5),
  torqueNmPerA: number(0.3, 3),
  windingC: number(-20, 160),
})

const map = fc.array(number(30, 99), { minLength: 6, maxLength: 6 }).map((pct) => ({
  speedRpm: [60, 500, 1500],
  torqueNm: [2, 60],
  efficiencyPct: [pct.slice(0, 3), pct.slice(3)],
}))

/** What a drive may say of its losses and limits, and how fast its driver changes speed. */
export const anyDriveMore: fc.Arbitrary<Partial<CarInput['drive']>> = fc
  .record({
    accelerationMps2: number(0.05, 5),
    brakingMps2: number(0.1, 8),
    regenerationMaxNm: number(0, 200),
    regenerationFromKmh: number(0, 30),
    regenerationBusMaxW: number(0, 3000),
    motorMaxRpm: number(100, 3000),
    losses: fc.oneof(
      terms.map((losses) => ({ losses })),
      map.map((rows) => ({ map: rows })),
      fc.constant({}),
    ),
  })
  .map(({ losses, ...limits }) => ({ ...limits, ...losses }))
