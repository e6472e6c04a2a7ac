/** A ledger line’s bar: ruled, since it is all to come; one scale for the whole table. */
export function LedgerBar({ side, wh, mostWh }: { side: 'in' | 'out'; wh: number; mostWh: number }) {
  const width = Math.max(0.8, (Math.abs(wh) / mostWh) * 98.5)
  return (
    <svg class={`ledbar ${side}`} width="100%" height="11" aria-hidden="true">
      <rect
        x="0.75"
        y="1.75"
        width={`${width}%`}
        height="7.5"
        fill={`url(#rule-${side}-bar)`}
        stroke={`var(--${side}-edge)`}
        stroke-width="1.25"
        stroke-dasharray={wh < 0 ? '3 2.5' : undefined}
      />
    </svg>
  )
}

/** Ruling shared by all charts of a page: lines for what is to come, hatch for what cannot be. */
export const Rulings = () => (
  <svg width="0" height="0" class="defs" aria-hidden="true">
    <defs>
      <pattern id="hatch" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
        <path d="M0 3H6" stroke="var(--ink-3)" stroke-width="1.2" />
      </pattern>
      {(['in', 'out'] as const).map((side) => (
        <>
          <pattern id={`rule-${side}`} width="8" height="4" patternUnits="userSpaceOnUse">
            <path d="M0 2H8" stroke={`var(--${side}-edge)`} stroke-width="1.3" />
          </pattern>
          <pattern id={`rule-${side}-bar`} width="8" height="3" patternUnits="userSpaceOnUse">
            <path d="M0 1.5H8" stroke={`var(--${side}-edge)`} stroke-width="1.1" />
          </pattern>
        </>
      ))}
    </defs>
  </svg>
)
