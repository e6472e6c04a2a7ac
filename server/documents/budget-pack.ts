import type { PackLimit } from '../engine/battery.ts'
import type { DayForecast } from '../engine/forecast.ts'
import type { DayBudget } from './budget.ts'

/** A limit of the pack in the words that people read. */
const LIMIT_LABELS: Record<PackLimit, string> = {
  'charge-voltage': 'Nearly full: held at the highest voltage',
  'charge-current': 'At the highest charging current',
  full: 'Full',
  'fullest-cell': 'The fullest cell is at its highest voltage',
  'too-cold-to-charge': 'Too cold to charge, or to charge faster',
  'too-hot-to-charge': 'Too hot to charge, or to charge faster',
  'discharge-voltage': 'At the lowest voltage',
  'discharge-current': 'At the highest discharging current',
  'discharge-power': 'More power than its resistance lets through',
  empty: 'Empty',
  'weakest-cell': 'The weakest cell is at its lowest voltage',
  'too-cold-to-discharge': 'Too cold to give more',
  'too-hot-to-discharge': 'Too hot to give more',
}

/** How warm the pack was on a day and what held it back. */
export function packOf({ balance, openingPackC }: DayForecast): DayBudget['pack'] {
  const { packC, packLimits } = balance
  return {
    openingC: openingPackC,
    closingC: packC.length > 0 ? packC[packC.length - 1] : openingPackC,
    coldestC: packC.reduce((least, value) => Math.min(least, value), openingPackC),
    warmestC: packC.reduce((most, value) => Math.max(most, value), openingPackC),
    limits: packLimits.map(({ limit, durationS, J }) => ({
      limit,
      label: LIMIT_LABELS[limit],
      minutes: durationS / 60,
      wh: J / 3600,
    })),
  }
}
