// Stands in for d3-interpolate in the build: the scales of the charts only ever blend numbers, and the
// package’s colours and text would weigh as much as all of d3-shape.

/** Numbers between two numbers, at 0 the first and at 1 the second. */
export const interpolateNumber = (from: number, to: number) => (share: number) => from * (1 - share) + to * share

/** The same in whole numbers. */
export const interpolateRound = (from: number, to: number) => (share: number) =>
  Math.round(from * (1 - share) + to * share)

export const interpolate = interpolateNumber

/** Numbers along several, evenly spaced from 0 to 1. */
export function piecewise(values: number[]): (share: number) => number {
  const last = values.length - 2
  return (share) => {
    const i = Math.max(0, Math.min(last, Math.floor(share * (values.length - 1))))
    return interpolateNumber(values[i], values[i + 1])(share * (values.length - 1) - i)
  }
}
