/** An instant, and by how much the energy then is over what is asked. */
export interface Excess {
  atS: number
  J: number
}

const MOST_STEPS = 40
const CLOSE_S = 1e-3
/** An excess under this is none. [J] */
const CLOSE_J = 1
/** Stands for an instant that cannot be reached at all. [J] */
const FAR_UNDER_J = -1e6

/**
 * Where an excess crosses 0 from below, never before it: false position, the value of an end that stays halved
 * (Illinois), now and then a plain halving.
 *
 * @param excessJ  increasing about the crossing; −Infinity where there is nothing. [J]
 * @param under    where it is under 0
 * @param above    where it is not
 * @source Dowell & Jarratt, A modified regula falsi method, BIT 11 (1971) (from memory)
 */
export function firstAbove(excessJ: (atS: number) => number, under: Excess, above: Excess): Excess {
  let low = { atS: under.atS, J: Math.max(under.J, FAR_UNDER_J) }
  let high = above
  let [lowJ, highJ] = [low.J, high.J]
  let side = 0
  for (let n = 0; n < MOST_STEPS && high.atS - low.atS > CLOSE_S && high.J > CLOSE_J; n++) {
    const share = n % 4 === 3 || low.J === FAR_UNDER_J ? 0.5 : lowJ / (lowJ - highJ)
    const atS = low.atS + (high.atS - low.atS) * Math.min(Math.max(share, 0.02), 0.98)
    const J = Math.max(excessJ(atS), FAR_UNDER_J)
    if (J >= 0) {
      if (side > 0) lowJ /= 2
      high = { atS, J }
      highJ = J
      side = 1
    } else {
      if (side < 0) highJ /= 2
      low = { atS, J }
      lowJ = J
      side = -1
    }
  }
  return high
}
