import { fixed } from '../coast-words.ts'
import { residualAxes, residualPaths } from './residual-paths.ts'
import { useWidth } from './use-width.ts'

interface ChartProps {
  /** What the chart shows, in words. */
  label: string
  run: { timeS: number[]; residualKmh: number[] }
  lastS: number
  mostKmh: number
  sdKmh: number
}

/** What a fit leaves of a run's speeds, row by row: ink is measured, the line is the fit. */
export function ResidualChart({ label, run, lastS, mostKmh, sdKmh }: ChartProps) {
  const { frame, width } = useWidth()
  const axes = residualAxes({ width, lastS, mostKmh, sdKmh })
  const { dots, diamonds } = residualPaths(axes, run, sdKmh)
  const { left, right, base, height, x, y, limitKmh } = axes
  return (
    <div class="bandframe" ref={frame}>
      <svg viewBox={`0 0 ${width} ${height}`} width={width} height={height} role="img" aria-label={label}>
        {[limitKmh, -limitKmh].map((kmh) => (
          <path d={`M${left} ${y(kmh)}H${right}`} stroke="var(--ink-3)" stroke-dasharray="4 3" />
        ))}
        {[limitKmh, 0, -limitKmh].map((kmh) => (
          <text x={left - 5} y={y(kmh) + 4} class="ax" text-anchor="end">
            {kmh === 0 ? '0' : `${kmh > 0 ? '+' : ''}${fixed(kmh, 1)}`}
          </text>
        ))}
        <path d={`M${left} ${y(0)}H${right}`} stroke="var(--out-edge)" stroke-width="1.5" />
        <path d={dots} stroke="var(--ink)" stroke-width="3" stroke-linecap="round" fill="none" />
        <path d={diamonds} stroke="var(--ink)" stroke-width="1.75" fill="var(--paper)" />
        <path d={`M${left} ${base}H${right}`} stroke="var(--ink)" stroke-width="1.25" />
        {axes.sTicks.map((s) => (
          <>
            <path d={`M${x(s)} ${base}v4`} stroke="var(--ink)" />
            <text x={x(s)} y={base + 17} class="ax" text-anchor="middle">
              {s}
            </text>
          </>
        ))}
        <text x={width} y={base + 17} class="ax" text-anchor="end">
          s
        </text>
      </svg>
    </div>
  )
}
