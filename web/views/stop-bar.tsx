import type { PointingWindow } from '../../server/documents/pointing.ts'
import { clock } from '../format.ts'

/** Width that the bar is drawn to; it grows with the page. */
const WIDTH = 358

/** The window as a bar: flat, lifted, flat, with the line of the present where it lies inside. */
export function StopBar({ window, nowMs }: { window: PointingWindow; nowMs: number }) {
  const { from, to, arrayUp, arrayDown, kind } = window
  const [start, end] = [Date.parse(from), Date.parse(to)]
  const x = (atMs: number): number => ((atMs - start) / (end - start)) * WIDTH
  const [up, down] = [x(Date.parse(arrayUp)), x(Date.parse(arrayDown))]
  const words = kind === 'stop' ? ['arrive', 'depart'] : ['from', 'to']
  const label = `From ${clock(from)} to ${clock(to)}, array up from ${clock(arrayUp)}, down from ${clock(arrayDown)}`
  return (
    <svg viewBox={`0 0 ${WIDTH} 64`} width="100%" role="img" aria-label={label} class="stopbar">
      <rect x="0.75" y="22" width={WIDTH - 1.5} height="20" fill="var(--sunk)" stroke="var(--ink)" stroke-width="1.5" />
      <rect
        x={up}
        y="22"
        width={down - up}
        height="20"
        fill="url(#rule-in)"
        stroke="var(--in-edge)"
        stroke-width="1.5"
      />
      {nowMs > start && nowMs < end && (
        <path d={`M${x(nowMs).toFixed(1)} 18v28`} stroke="var(--ink)" stroke-width="3" />
      )}
      <text x="0" y="14" font-size="13">
        Array up {clock(arrayUp)}
      </text>
      <text x={WIDTH} y="14" font-size="13" text-anchor="end" font-weight="700">
        Lower it from {clock(arrayDown)}
      </text>
      <text x="0" y="60" font-size="13" class="q">
        {clock(from)} {words[0]}
      </text>
      <text x={WIDTH} y="60" font-size="13" text-anchor="end" class="q">
        {words[1]} {clock(to)}
      </text>
    </svg>
  )
}
