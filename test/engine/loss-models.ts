/**
 * Published loss curves of other make, as sources of bench points: DC power and voltage in, power out.
 *
 * @source Driesse, Jain & Harrison 2008 and King et al. 2007 (SAND2007-5036) as documented in the public tests and
 * docstrings of pvlib-python, snapshot 6382338; formulas from memory
 */

/** Output over rated power by the nine coefficients of Driesse et al.; rows of p⁰, p¹, p²; columns 1, v − 1, 1/v − 1. */
const DRIESSE = {
  ratedW: 2200,
  ratedV: 396,
  rows: [
    [0.01385, 0.0152, 0.00794],
    [0.00286, -0.01872, -0.01305],
    [0, 0, 0],
  ],
}

export function driesseOutputW(inputV: number, inputW: number): number {
  const { ratedW, ratedV, rows } = DRIESSE
  const v = inputV / ratedV
  const p = inputW / ratedW
  const at = [1, v - 1, 1 / v - 1]
  const lossShare = at.reduce((sum, factor, k) => sum + factor * (rows[k][0] + rows[k][1] * p + rows[k][2] * p * p), 0)
  return (p - lossShare) * ratedW
}

const SANDIA = {
  Po: 250,
  Pdo: 259.522_050_5,
  Vdo: 40.242_603_17,
  Pso: 1.771_614_224,
  C0: -2.48e-5,
  C1: -9.01e-5,
  C2: 6.69e-4,
  C3: -0.0189,
}

export function sandiaOutputW(inputV: number, inputW: number): number {
  const { Po, Pdo, Vdo, Pso, C0, C1, C2, C3 } = SANDIA
  const A = Pdo * (1 + C1 * (inputV - Vdo))
  const B = Pso * (1 + C2 * (inputV - Vdo))
  const C = C0 * (1 + C3 * (inputV - Vdo))
  return (Po / (A - B) - C * (A - B)) * (inputW - B) + C * (inputW - B) ** 2
}
