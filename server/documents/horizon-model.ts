import { horizon } from '../engine/horizon.ts'
import type { Horizon } from '../engine/horizon.ts'
import type { ShadeRow } from '../engine/shade.ts'
import type { HorizonDocument, ShadeDocument } from './horizon.ts'

const DEG = Math.PI / 180

/** A horizon as the engine needs it; undefined where the document has none. */
export function horizonModel(rows: HorizonDocument, field: string): Horizon | undefined {
  const inRad = rows?.map((row) => ({ azimuthRad: row.azimuthDeg * DEG, heightRad: row.heightDeg * DEG }))
  return inRad === undefined ? undefined : horizon(field, inRad)
}

/** A panel's table of shade as the engine needs it; undefined where the document has none. */
export const shadeModel = (rows: ShadeDocument): ShadeRow[] | undefined =>
  rows?.map((row) => ({
    bearingRad: row.bearingDeg * DEG,
    heightRad: row.heightDeg * DEG,
    lostShare: row.lostPct / 100,
  }))
