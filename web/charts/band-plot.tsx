import { useMemo } from 'preact/hooks'
import type { DayBudget } from '../../server/documents/budget.ts'
import { clockAt, grouped } from '../format.ts'
import type { Axis } from './axis.ts'
import { PLOT, type Reading } from './band.ts'
import { Battery, Cursor, LaneNames, Power, Reserve, Road, Scale, Stops } from './band-tracks.tsx'
import { bandText, gateName } from './gate-words.ts'
import { gateLane, TIER_PX } from './lane.ts'
import { textWidth } from './text-width.ts'

type Gate = DayBudget['gates'][number]

interface PlotProps {
  day: DayBudget
  axis: Axis
  width: number
  reading: Reading | null
  onRead: (ms: number) => void
}

/** The band’s tracks over each other on one axis. */
export function Plot({ day, axis, width, reading, onRead }: PlotProps) {
  const lane = useMemo(() => gateLane(day, axis, width, gateWidth), [day, axis, width])
  const top = lane.tiers * TIER_PX + 4
  const zero = top + PLOT.half
  const height = top + PLOT.foot
  const read = (clientX: number, plot: SVGSVGElement): void => {
    const box = plot.getBoundingClientRect()
    onRead(axis.atMs(Math.min(axis.width, Math.max(0, ((clientX - box.left) / box.width) * width))))
  }
  return (
    <svg
      viewBox={`0 0 ${width} ${height}`}
      width={width}
      height={height}
      role="img"
      aria-label={bandText(day)}
      class="band"
      onPointerDown={(event) => read(event.clientX, event.currentTarget)}
      onPointerMove={(event) =>
        (event.buttons > 0 || event.pointerType === 'mouse') && read(event.clientX, event.currentTarget)
      }
    >
      <Stops day={day} axis={axis} top={top} />
      <Power day={day} axis={axis} zero={zero} />
      <Reserve day={day} axis={axis} top={top} />
      <Battery day={day} axis={axis} top={top} lane={lane} />
      <LaneNames lane={lane} top={top} />
      <Scale axis={axis} top={top} width={width} />
      <Road day={day} axis={axis} top={top} />
      {reading !== null && <Cursor x={axis.x(reading.atMs)} top={top} text={clockAt(reading.atMs, day.utcOffsetMin)} />}
    </svg>
  )
}

const gateWidth = (gate: Gate): number =>
  Math.max(textWidth(gateName(gate), '500 12px'), textWidth(grouped(gate.chargePct), '700 15px') + 16)
