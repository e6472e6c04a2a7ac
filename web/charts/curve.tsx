import type { Curve, KeptReading, TrackerDay } from '../crew-types.ts'
import { pct1 } from '../log-reading.ts'
import { curveAxes, curvePaths, fallPath, type Mark } from './curve-paths.ts'
import { useWidth } from './use-width.ts'

interface ChartProps {
  /** What the chart shows, in words. */
  label: string
  inputW: number[]
  maxW: number
  /** The curve in use with its band. */
  curve: Curve
  /** The bench's curve, where another one is in use. */
  bench?: Curve
  marks: Mark[]
  fell?: TrackerDay['fell']
}

/** Efficiency along the input power: curve in its band, readings as diamonds with their meters’ error. */
export function CurveChart({ label, inputW, maxW, curve, bench, marks, fell }: ChartProps) {
  const { frame, width } = useWidth()
  const axes = curveAxes({ width, maxW, curve, marks, hasFall: fell !== undefined })
  const { band, low, high, line } = curvePaths(axes, inputW, curve)
  return (
    <div class="bandframe" ref={frame}>
      <svg viewBox={`0 0 ${width} ${axes.height}`} width={width} height={axes.height} role="img" aria-label={label}>
        <defs>
          <clipPath id={`clip-${axes.height}`}>
            <rect x={axes.left} y="0" width={axes.right - axes.left} height={axes.base} />
          </clipPath>
        </defs>
        <rect
          x={axes.left}
          y="0"
          width={axes.right - axes.left}
          height={Math.max(0, axes.y(100))}
          fill="url(#hatch)"
          opacity=".7"
        />
        {axes.pctTicks.map((pct) => (
          <>
            <path
              d={`M${axes.left} ${axes.y(pct)}H${axes.right}`}
              stroke={pct === 100 ? 'var(--ink)' : 'var(--hair)'}
              stroke-width={pct === 100 ? 1.5 : 1}
            />
            <text x={axes.left - 5} y={axes.y(pct) + 4} class="ax" text-anchor="end">
              {pct}
            </text>
          </>
        ))}
        {axes.y(100) > 24 && (
          <text x={axes.left + 6} y={axes.y(100) - 6} class="ax halo">
            more out than in: not possible
          </text>
        )}
        <g clip-path={`url(#clip-${axes.height})`} fill="none" stroke="var(--out-edge)">
          <path d={band} fill="var(--out)" fill-opacity=".42" stroke="none" />
          <path d={`${low}${high}`} />
          {bench !== undefined && (
            <path
              d={curvePaths(axes, inputW, bench).line}
              stroke="var(--ink-2)"
              stroke-width="1.5"
              stroke-dasharray="5 3"
            />
          )}
          <path d={line} stroke-width="2.5" />
        </g>
        {fell !== undefined && <path d={fallPath(axes, fell)} fill="url(#rule-in-bar)" stroke="var(--in-edge)" />}
        {marks.map((mark) => (
          <Diamond mark={mark} x={axes.x(mark.inputW)} y={axes.y} />
        ))}
        <path d={`M${axes.left} ${axes.foot}H${axes.right}`} stroke="var(--ink)" stroke-width="1.25" />
        {axes.wTicks.map((w) => (
          <>
            <path d={`M${axes.x(w)} ${axes.foot}v4`} stroke="var(--ink)" />
            <text x={axes.x(w)} y={axes.foot + 17} class="ax" text-anchor="middle">
              {w}
            </text>
          </>
        ))}
        <text x={width} y={axes.foot + 17} class="ax" text-anchor="end">
          W in
        </text>
      </svg>
    </div>
  )
}

/** A reading: full where it counts, hollow where it does not. */
function Diamond({ mark, x, y }: { mark: Mark; x: number; y: (pct: number) => number }) {
  const { efficiencyPct: pct, uncertaintyPct: u } = mark
  return (
    <g stroke="var(--ink)">
      <path d={`M${x} ${y(pct + 2 * u)}V${y(pct - 2 * u)}`} stroke-width="1.25" />
      <path
        d={`M${x} ${y(pct) - 5}l5 5l-5 5l-5-5z`}
        fill={mark.counts ? 'var(--ink)' : 'var(--paper)'}
        stroke-width="2"
      />
      {mark.text !== undefined && (
        <text x={x - 10} y={y(pct) + 4} class="ax now halo" text-anchor="end">
          {mark.text}
        </text>
      )}
    </g>
  )
}

/** A reading of the list as a mark of the chart. */
export const markOf = (entry: KeptReading): Mark => ({
  inputW: entry.reading.inputV * entry.reading.inputA,
  efficiencyPct: entry.efficiencyPct,
  uncertaintyPct: entry.uncertaintyPct,
  counts: entry.counts && !entry.isSetAside,
})

/** A curve in words, for those who do not see it. */
export const curveText = (name: string, marks: Mark[]): string =>
  `${name}: efficiency against watts in with its band; ${marks.length === 0 ? 'no readings' : marks.map((mark) => `${pct1(mark.efficiencyPct)} percent at ${Math.round(mark.inputW)} watts`).join(', ')}`
