export type Freshness = 'fresh' | 'ageing' | 'old'

const H = 3_600_000

/** Forecasts are fresh to 2 h and old after 12 h. */
export const forecastFreshness = (ageMs: number): Freshness =>
  ageMs <= 2 * H ? 'fresh' : ageMs <= 12 * H ? 'ageing' : 'old'

/** Answers worked out in this client go the way of their inputs: fresh while the page is in use. */
export const answerFreshness = (ageMs: number): Freshness =>
  ageMs <= H / 4 ? 'fresh' : ageMs <= 2 * H ? 'ageing' : 'old'
