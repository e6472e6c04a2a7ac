/**
 * Values of the natural cubic smoothing spline at its own knots: of all curves f the one with the least
 * ∫(y − f)² ds + L⁴ ∫ f″² ds. Straight lines come back unchanged, ends included. A wave of wavelength λ keeps
 * 1 / (1 + (2πL/λ)⁴) of its height, whatever the spacing of the knots, since each knot weighs the length it stands for.
 *
 * @param x        places, strictly ascending, at least 3. [m]
 * @param y        values there
 * @param lengthM  L. [m]
 * @source C. H. Reinsch, 1967, Smoothing by spline functions, Numerische Mathematik 10, 177–183; the banded form as in
 *         Green & Silverman, 1994, Nonparametric Regression, §2.3
 */
export function smoothingSpline(x: Float64Array, y: Float64Array, lengthM: number): Float64Array {
  const n = x.length
  const h = new Float64Array(n - 1)
  for (let i = 0; i < n - 1; i++) h[i] = x[i + 1] - x[i]
  const inverseWeight = new Float64Array(n)
  for (let i = 0; i < n; i++) inverseWeight[i] = 2 / ((i > 0 ? h[i - 1] : 0) + (i < n - 1 ? h[i] : 0))
  const alpha = lengthM ** 4
  const curvature = solveBanded(bands(h, inverseWeight, alpha), secondDifferences(h, y))
  const smooth = Float64Array.from(y)
  for (let j = 0; j < n - 2; j++) {
    smooth[j] -= (alpha * inverseWeight[j] * curvature[j]) / h[j]
    smooth[j + 1] += alpha * inverseWeight[j + 1] * curvature[j] * (1 / h[j] + 1 / h[j + 1])
    smooth[j + 2] -= (alpha * inverseWeight[j + 2] * curvature[j]) / h[j + 1]
  }
  return smooth
}

interface Bands {
  diagonal: Float64Array
  first: Float64Array
  second: Float64Array
}

function secondDifferences(h: Float64Array, y: Float64Array): Float64Array {
  const d = new Float64Array(h.length - 1)
  for (let j = 0; j < d.length; j++) d[j] = (y[j + 2] - y[j + 1]) / h[j + 1] - (y[j + 1] - y[j]) / h[j]
  return d
}

/** R + α Qᵀ W⁻¹ Q of Green & Silverman: symmetric, five bands, positive definite. */
function bands(h: Float64Array, inverseWeight: Float64Array, alpha: number): Bands {
  const m = h.length - 1
  const result = { diagonal: new Float64Array(m), first: new Float64Array(m), second: new Float64Array(m) }
  for (let j = 0; j < m; j++) {
    const a = 1 / h[j]
    const c = 1 / h[j + 1]
    const b = a + c
    const [u, v, w] = [inverseWeight[j], inverseWeight[j + 1], inverseWeight[j + 2]]
    result.diagonal[j] = (h[j] + h[j + 1]) / 3 + alpha * (a * a * u + b * b * v + c * c * w)
    if (j + 1 < m) {
      const nextB = c + 1 / h[j + 2]
      result.first[j] = h[j + 1] / 6 - alpha * (b * c * v + c * nextB * w)
    }
    if (j + 2 < m) result.second[j] = (alpha * c * w) / h[j + 2]
  }
  return result
}

/** L D Lᵀ in place of the bands, then the two substitutions. */
function solveBanded({ diagonal, first, second }: Bands, right: Float64Array): Float64Array {
  const m = diagonal.length
  for (let j = 0; j < m; j++) {
    const f = first[j] / diagonal[j]
    const s = second[j] / diagonal[j]
    if (j + 1 < m) {
      diagonal[j + 1] -= f * first[j]
      first[j + 1] -= f * second[j]
      right[j + 1] -= f * right[j]
    }
    if (j + 2 < m) {
      diagonal[j + 2] -= s * second[j]
      right[j + 2] -= s * right[j]
    }
    first[j] = f
    second[j] = s
  }
  for (let j = m - 1; j >= 0; j--) {
    right[j] /= diagonal[j]
    if (j + 1 < m) right[j] -= first[j] * right[j + 1]
    if (j + 2 < m) right[j] -= second[j] * right[j + 2]
  }
  return right
}
