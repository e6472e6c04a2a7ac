/** What comes in, goes out, is missing and is denied, in the order of the ledger. */
export const QUANTITIES = [
  'income',
  'rolling',
  'drag',
  'climbing',
  'brakes',
  'auxiliaries',
  'trackers',
  'drive',
  'pack',
  'short',
  'window',
  'tracking',
  'full',
] as const
export type Quantity = (typeof QUANTITIES)[number]

/** Energy by quantity. [J] */
export type Energy = Record<Quantity, number>

export const noEnergy = (): Energy => Object.fromEntries(QUANTITIES.map((q) => [q, 0])) as Energy
