export type Path = (string | number)[]

/** `['panels', 2, 'pitchDeg']` as errors name it: `panels[2].pitchDeg`. */
export const named = (path: Path): string =>
  path.map((step, i) => (typeof step === 'number' ? `[${step}]` : i === 0 ? step : `.${step}`)).join('')

/** Whether one field is the other, holds it or lies in it. */
export const isRelated = (one: string, other: string): boolean => one === other || lies(one, other) || lies(other, one)

const lies = (inner: string, outer: string): boolean =>
  inner.startsWith(outer) && ['.', '['].includes(inner[outer.length])

export const isObject = (value: unknown): value is Record<string, unknown> =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

/** A copy with the value at a path made anew; undefined takes it out. */
export function changedAt(root: unknown, [step, ...rest]: Path, change: (value: unknown) => unknown): unknown {
  if (step === undefined) return change(root)
  if (Array.isArray(root)) {
    const changed = changedAt(root[Number(step)], rest, change)
    const after = root.slice(Number(step) + 1)
    return [...root.slice(0, Number(step)), ...(changed === undefined ? [] : [changed]), ...after]
  }
  if (!isObject(root)) return root
  const changed = changedAt(root[step], rest, change)
  if (changed !== undefined) return { ...root, [step]: changed }
  return Object.fromEntries(Object.entries(root).filter(([key]) => key !== step))
}

const RAW = '\u0001raw:'

/** A value that is written as it stands, JSON or not. */
export const raw = (text: string): string => `${RAW}${text}`

/** JSON text in which raw values stand bare. */
export const written = (value: unknown): string =>
  JSON.stringify(value).replace(/"\\u0001raw:(?:[^"\\]|\\.)*"/g, (text) => String(JSON.parse(text)).slice(RAW.length))
