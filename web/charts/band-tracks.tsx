import { useMemo } from 'preact/hooks'
import type { DayBudget } from '../../server/documents/budget.ts'
import { grouped, round10, THIN } from '../format.ts'
import type { Axis } from './axis.ts'
import { chargePath, chargeY, mostW, PLOT, powerBins, powerPath, roadHeight } from './band.ts'
import { gateName } from './gate-words.ts'
import { type Lane, TIER_PX } from './lane.ts'

export function Stops({ day, axis, top }: { day: DayBudget; axis: Axis; top: number }) {
  return (
    <g>
      {day.spans
        .filter((span) => span.kind === 'stop')
        .map((span) => {
          const from = axis.x(Date.parse(span.from))
          const to = Math.max(from + 1, axis.x(Date.parse(span.to)))
          return (
            <>
              <rect x={from} y={top} width={to - from} height={PLOT.roadBase} fill="var(--sunk)" />
              <path d={`M${from} ${top}v${PLOT.roadBase}M${to} ${top}v${PLOT.roadBase}`} stroke="var(--ink-3)" />
            </>
          )
        })}
    </g>
  )
}

export function Power({ day, axis, zero }: { day: DayBudget; axis: Axis; zero: number }) {
  const bins = useMemo(() => powerBins(day), [day])
  return (
    <g data-most-w={mostW(bins)}>
      {(['in', 'out'] as const).map((side) => (
        <path
          d={powerPath(bins, axis, side, zero)}
          fill={`url(#rule-${side})`}
          stroke={`var(--${side}-edge)`}
          stroke-width="1.5"
          data-side={side}
        />
      ))}
      <path d={`M0 ${zero}H${axis.width}`} stroke="var(--ink)" stroke-width="1.25" />
    </g>
  )
}

export function Reserve({ day, axis, top }: { day: DayBudget; axis: Axis; top: number }) {
  const y = chargeY(top)(day.reserve.chargePct)
  return (
    <g>
      <path d={`M0 ${y - 1.6}H${axis.width}M0 ${y + 1.6}H${axis.width}`} stroke="var(--floor)" stroke-width="1.4" />
      <text x="0" y={y + 16} class="fl">
        {`Reserve ${grouped(day.reserve.chargePct)}${THIN}% charge, ${grouped(round10(day.reserve.wh))}${THIN}Wh`}
      </text>
    </g>
  )
}

export function Battery({ day, axis, top, lane }: { day: DayBudget; axis: Axis; top: number; lane: Lane }) {
  const d = useMemo(() => chargePath(day, axis, top), [day, axis, top])
  const y = chargeY(top)
  return (
    <g fill="none" stroke-linejoin="round">
      <path d={d} stroke="var(--paper)" stroke-width="5.5" />
      <path d={d} stroke="var(--bal)" stroke-width="2.5" stroke-dasharray="7 3.5" data-side="battery" />
      {lane.labels
        .filter(({ gate }) => gate.kind === 'arrive' || gate.kind === 'finish' || gate.kind === 'camp')
        .map(({ gate, gateX }) => (
          <circle cx={gateX} cy={y(gate.chargePct)} r="4.4" class="gd" />
        ))}
    </g>
  )
}

export function LaneNames({ lane, top }: { lane: Lane; top: number }) {
  const base = (tier: number): number => (lane.tiers - 1 - tier) * TIER_PX
  return (
    <g>
      {lane.labels
        .filter(({ tier }) => tier > 0)
        .map(({ gateX, tier }) => (
          <path d={`M${gateX} ${base(tier) + 33}V${top}`} stroke="var(--ink-3)" />
        ))}
      {lane.labels.map(({ gate, x, tier }) => (
        <>
          <text x={x} y={base(tier) + 12} class="pl halo" text-anchor="middle">
            {gateName(gate)}
          </text>
          <text x={x} y={base(tier) + 30} class="gl halo" text-anchor="middle">
            {grouped(gate.chargePct)}
            <tspan class="gu">{`${THIN}%`}</tspan>
          </text>
        </>
      ))}
    </g>
  )
}

export function Scale({ axis, top, width }: { axis: Axis; top: number; width: number }) {
  const y = chargeY(top)
  return (
    <g>
      {[0, 50, 100].map((pct) => (
        <>
          <path d={`M${axis.width} ${y(pct)}h4`} stroke="var(--ink-3)" />
          <text x={width} y={y(pct) + 4} class="ax" text-anchor="end">{`${pct}${THIN}%`}</text>
        </>
      ))}
    </g>
  )
}

export function Road({ day, axis, top }: { day: DayBudget; axis: Axis; top: number }) {
  const road = useMemo(() => roadHeight(day, axis, top), [day, axis, top])
  const base = top + PLOT.roadBase
  const peakX = Math.min(Math.max(road.peak.x, 105), axis.width - 24)
  return (
    <g>
      <path d={road.area} fill="var(--sunk)" />
      <path d={road.line} fill="none" stroke="var(--ink)" stroke-width="1.5" />
      <text x="0" y={base - 10} class="ax halo">
        Road height
      </text>
      <text x={peakX} y={road.peak.y - 5} class="ax halo" text-anchor="middle">
        {`${grouped(road.peak.m)}${THIN}m`}
      </text>
      <path d={`M0 ${base}H${axis.width}`} stroke="var(--ink)" stroke-width="1.25" />
      {axis.ticks.map((tick) => (
        <>
          <path d={`M${tick.x} ${base}v4`} stroke="var(--ink)" />
          <text x={Math.max(8, tick.x)} y={base + 17} class="ax" text-anchor="middle">
            {tick.text}
          </text>
        </>
      ))}
    </g>
  )
}

export function Cursor({ x, top, text }: { x: number; top: number; text: string }) {
  const base = top + PLOT.roadBase
  const middle = Math.max(25, x)
  return (
    <g>
      <path d={`M${x} ${top}V${base}`} stroke="var(--ink)" stroke-width="1.25" stroke-dasharray="2 2" />
      <rect x={middle - 24} y={base + 1} width="48" height="21" rx="3" class="tab" />
      <text x={middle} y={base + 16} text-anchor="middle" class="tabt">
        {text}
      </text>
    </g>
  )
}
