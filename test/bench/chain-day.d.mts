import type { ArrayHarvest, ArrayModel } from '../../server/engine/array.ts'
import type { PoseAlong } from '../../server/engine/panel-light.ts'
import type { prepareSky } from '../../server/engine/sky.ts'
import type { Along } from '../../server/engine/sun.ts'

/** What is read of test/reference/chain.json by its types; the rest by the rules written in it. */
export interface Chain {
  date_local: string
  utc_offset_h: number
  panels: { name: string; strings: number }[]
  expected: Record<
    'rows' | 'wh_total_60s' | 'wh_total_iam_60s' | 'wh_total_1s' | 'wh_total_iam_1s' | 'p_total_max_w',
    number
  >
}

export function chainSteps(chain: Chain, stepS: number): { along: Along; pose: PoseAlong; distKm: Float64Array }
export function chainSky(chain: Chain): Parameters<typeof prepareSky>[0]
export function chainArray(chain: Chain, incidence: 'none' | 'physical'): ArrayModel
export function totalW(harvest: ArrayHarvest): Float64Array
export function trapezoidWh(watts: Float64Array, stepS: number): number
