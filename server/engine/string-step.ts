import { BOLTZMANN_EV_PER_K, REFERENCE_K, REFERENCE_WM2, ZERO_C_K } from './cell.ts'
import { currentAtV } from './string-curve.ts'
import type { StringSolver } from './string-solver.ts'

/**
 * Takes the light and warmth of one step: single-diode values of every part, and the order in which substrings give way.
 *
 * The values are those of `deSoto`.
 *
 * @param effectiveWm2  light past the cover, before soiling. [W/m²] (panels × steps)
 * @param cellC         cell temperature. [°C] (panels × steps)
 */
export function loadStep(s: StringSolver, effectiveWm2: Float64Array[], cellC: Float64Array[], step: number): void {
  fillDiodes(s, effectiveWm2, cellC, step)
  rank(s)
  addUp(s)
}

function fillDiodes(s: StringSolver, effectiveWm2: Float64Array[], cellC: Float64Array[], step: number): void {
  const { cell, panel, lightA, saturationA, thermalV, shuntS, openV } = s
  for (let p = 0; p < panel.length; p++) {
    const k = panel[p]
    const T = cellC[k][step] + ZERO_C_K
    if (p > 0 && panel[p - 1] === k) {
      saturationA[p] = saturationA[p - 1]
      thermalV[p] = thermalV[p - 1]
    } else {
      const ratio = T / REFERENCE_K
      const Eg = cell.bandGapEv * (1 + cell.bandGapPerC * (T - REFERENCE_K))
      saturationA[p] =
        cell.saturationA *
        (ratio * ratio * ratio) *
        Math.exp((cell.bandGapEv / REFERENCE_K - Eg / T) / BOLTZMANN_EV_PER_K)
      thermalV[p] = cell.modifiedIdealityV * ratio
    }
    const S = Math.max(effectiveWm2[k][step] * s.lightShare[p], 0) / REFERENCE_WM2
    lightA[p] = S * (cell.lightA + cell.currentCoefficientAPerC * (T - REFERENCE_K))
    shuntS[p] = S / cell.shuntOhm
    openV[p] = lightA[p] > 0 ? thermalV[p] * Math.log(1 + lightA[p] / saturationA[p]) : 0
  }
}

/** Orders the substrings that carry current. */
function rank(s: StringSolver): void {
  const { order, pastA, dropV } = s
  s.carrying = 0
  s.darkV = 0
  for (let k = 0; k < dropV.length; k++) {
    const A = mostThroughA(s, k)
    if (A === 0) {
      s.darkV += dropV[k]
      continue
    }
    let at = s.carrying++
    for (; at > 0 && pastA[at - 1] < A; at--) {
      pastA[at] = pastA[at - 1]
      order[at] = order[at - 1]
    }
    pastA[at] = A
    order[at] = k
  }
}

/** Hardly above the current at which a substring gives way; 0 where one of its cells is dark. */
function mostThroughA(s: StringSolver, k: number): number {
  const { firstPart, lightA, saturationA, shuntS, cells, openV, part, dropV } = s
  const first = firstPart[k]
  const parts = firstPart[k + 1] - first
  let openSum = 0
  for (let i = 0; i < parts; i++) {
    const p = first + i
    if (!(lightA[p] > 0)) return 0
    part[i] = p
    openSum += cells[p] * openV[p]
  }
  if (parts === 1 || dropV[k] === Infinity)
    return lightA[first] + saturationA[first] + (shuntS[first] * dropV[k]) / cells[first]
  return currentAtV(s, parts, 0, openSum, -dropV[k])
}

function addUp(s: StringSolver): void {
  const { order, firstPart, dropV, openV, cells, part, partsUpTo, mostV, lostV } = s
  let lost = s.darkV
  for (let at = s.carrying - 1; at >= 0; at--) {
    lostV[at] = lost
    lost += dropV[order[at]]
  }
  let total = 0
  let count = 0
  for (let at = 0; at < s.carrying; at++) {
    const k = order[at]
    for (let p = firstPart[k]; p < firstPart[k + 1]; p++) {
      part[count++] = p
      total += cells[p] * openV[p]
    }
    partsUpTo[at] = count
    mostV[at] = total - lostV[at]
  }
}
