import type { PartOfDay, TrackerWork } from '../crew-types.ts'
import { outsideMinutes } from '../tracker-part.ts'
import { useWidth } from './use-width.ts'
import { type WindowPlot, windowPlot } from './window-paths.ts'

interface ChartProps {
  work: TrackerWork
  part: PartOfDay
  utcOffsetMin: number
}

/** String voltage below the pack’s over a part of the day; hatched is where the tracker cannot hold its string. */
export function WindowChart({ work, part, utcOffsetMin }: ChartProps) {
  const { frame, width } = useWidth()
  const plot = windowPlot({ width, work, part, utcOffsetMin })
  return (
    <div class="bandframe" ref={frame}>
      {plot === null ? (
        <p class="note">It held no string here.</p>
      ) : (
        <Plot plot={plot} width={width} label={windowText(work, part)} minutes={outsideMinutes(part)} />
      )}
    </div>
  )
}

/** The chart in words. */
const windowText = ({ name }: TrackerWork, part: PartOfDay): string =>
  `${name}: string voltage against pack voltage, ${part.name}; ${Math.round(outsideMinutes(part))} minutes outside its window`

function Plot({ plot, width, label, minutes }: { plot: WindowPlot; width: number; label: string; minutes: number }) {
  const { left, right, base, height } = plot
  return (
    <svg viewBox={`0 0 ${width} ${height}`} width={width} height={height} role="img" aria-label={label}>
      {plot.stops.map((stop) => (
        <rect x={stop.x} y="0" width={stop.width} height={base} fill="var(--sunk)" />
      ))}
      <path d={plot.above} fill="url(#hatch)" opacity=".7" />
      <path d={plot.below} fill="url(#hatch)" opacity=".7" />
      {plot.voltTicks.map(({ y, text }) => (
        <>
          <path d={`M${left} ${y}H${right}`} stroke="var(--hair)" />
          <text x={left - 5} y={y + 4} class="ax" text-anchor="end">
            {text}
          </text>
        </>
      ))}
      <path d={plot.pack} fill="none" stroke="var(--bal)" stroke-width="2.5" />
      <path d={plot.string} fill="none" stroke="var(--in-edge)" stroke-width="2.5" />
      <text x={plot.packAt[0]} y={plot.packAt[1]} class="ax now halo" text-anchor="middle">
        pack
      </text>
      <text x={plot.stringAt[0]} y={plot.stringAt[1]} class="ax now halo str" text-anchor="middle">
        string
      </text>
      {plot.outside.map((stay) => (
        <rect x={stay.x} y={base - 6} width={stay.width} height="6" fill="var(--ink)" />
      ))}
      {plot.outside.length > 0 && (
        <text x={Math.max(plot.outside[0].x, left)} y={base - 10} class="ax now halo">
          {Math.round(minutes)} min outside
        </text>
      )}
      <path d={`M${left} ${base}H${right}`} stroke="var(--ink)" stroke-width="1.25" />
      {plot.timeTicks.map(({ x, text }) => (
        <>
          <path d={`M${x} ${base}v4`} stroke="var(--ink)" />
          <text x={x} y={base + 17} class="ax" text-anchor="middle">
            {text}
          </text>
        </>
      ))}
    </svg>
  )
}
