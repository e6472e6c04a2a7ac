import type { SpeedsInput } from '../server/documents/speeds.ts'

type Legs = Extract<SpeedsInput, { kind: 'legs' }>

/** Speed held on a stage. [km/h] */
export const legSpeed = (speeds: Legs, stage: string): number =>
  speeds.legs.find((leg) => leg.stage === stage)?.speedKmh ?? speeds.speedKmh

/** The same speeds but for one stage. */
export const withLeg = (speeds: Legs, stage: string, speedKmh: number): Legs => ({
  ...speeds,
  legs: [...speeds.legs.filter((leg) => leg.stage !== stage), { stage, speedKmh }],
})

/** The one speed to start trying from: the one set, the one found, or the mean of the day. [km/h] */
export function ownSpeed(
  speeds: SpeedsInput,
  heldKmh: number | null,
  stages: { meanKmh: number; drivenKm: number }[],
): number {
  if (speeds.kind === 'constant') return speeds.speedKmh
  if (heldKmh !== null) return Math.round(heldKmh)
  if (speeds.kind === 'legs') return speeds.speedKmh
  const km = stages.reduce((sum, stage) => sum + stage.drivenKm, 0)
  const kmh = stages.reduce((sum, stage) => sum + stage.meanKmh * stage.drivenKm, 0)
  return km > 0 ? Math.round(kmh / km) : 60
}
