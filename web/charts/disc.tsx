import type { Freshness } from '../age.ts'

const WORDS: Record<Freshness, string> = { fresh: 'fresh', ageing: 'ageing', old: 'old' }

/** Full disc fresh, half disc ageing, broken ring old. */
export const Disc = ({ age }: { age: Freshness }) => (
  <svg width="14" height="14" viewBox="0 0 14 14" role="img" aria-label={WORDS[age]}>
    <circle
      cx="7"
      cy="7"
      r="5.2"
      fill={age === 'fresh' ? 'var(--ink)' : 'none'}
      stroke="var(--ink)"
      stroke-width="1.6"
      stroke-dasharray={age === 'old' ? '3 2.2' : undefined}
    />
    {age === 'ageing' && <path d="M7 1.8a5.2 5.2 0 0 1 0 10.4z" fill="var(--ink)" />}
  </svg>
)
