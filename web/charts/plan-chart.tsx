import { useMemo } from 'preact/hooks'
import type { DayBudget } from '../../server/documents/budget.ts'
import { clock, grouped, round10, THIN, whText } from '../format.ts'
import type { Planned } from '../plan-types.ts'
import { whRange } from '../plan-words.ts'
import { type Axis, bandAxis } from './axis.ts'
import { PLOT } from './band.ts'
import { Road } from './band-tracks.tsx'
import { gateName } from './gate-words.ts'
import { gateLane, type Lane, TIER_PX } from './lane.ts'
import {
  batteryPath,
  driveSpeeds,
  energyY,
  fanPaths,
  fanPoints,
  speedLabels,
  speedPaths,
  speedSpan,
  speedY,
  TRACKS,
} from './plan-tracks.ts'
import { textWidth } from './text-width.ts'
import { useWidth } from './use-width.ts'

type Gate = DayBudget['gates'][number]

interface TrackProps {
  plan: Planned
  axis: Axis
  top: number
  width: number
}

/** The plan over the road: battery with its range, held speed under the limits, height. */
export function PlanChart({ plan }: { plan: Planned }) {
  const { frame, width } = useWidth()
  const { budget } = plan.forPeople
  const axis = useMemo(() => bandAxis(budget, 'distance', width - scaleRoom()), [budget, width])
  const lane = useMemo(() => gateLane(fromStart(budget), axis, width, gateWidth), [budget, axis, width])
  const top = lane.tiers * TIER_PX + 6
  return (
    <section class="sec pad" aria-labelledby="chart-title">
      <div class="sech">
        <h2 id="chart-title">The plan over the road</h2>
      </div>
      <Key hasRange={plan.ranges !== null} />
      <div class="bandframe" ref={frame}>
        <svg
          viewBox={`0 0 ${width} ${top + TRACKS.foot}`}
          width={width}
          height={top + TRACKS.foot}
          role="img"
          aria-label={chartText(plan)}
          class="plan"
        >
          <ToCome />
          <Still day={budget} axis={axis} top={top} />
          <Battery plan={plan} axis={axis} top={top} width={width} />
          <Speed plan={plan} axis={axis} top={top} width={width} />
          <Road day={budget} axis={axis} top={top + TRACKS.road - PLOT.roadBase} />
          <Names lane={lane} top={top} />
        </svg>
      </div>
      <p class="note">
        At the speeds for people. Grey is a stop. Still hours are folded. Times and energies of every gate are in the
        table of gates.
      </p>
    </section>
  )
}

/** The day without its dawn, for whose name the lane has no room. */
const fromStart = (day: DayBudget): DayBudget => ({ ...day, gates: day.gates.filter(({ kind }) => kind !== 'dawn') })

const scaleRoom = (): number => Math.ceil(textWidth(`5${THIN}000`, '400 12px')) + 8

const gateWidth = (gate: Gate): number =>
  Math.max(textWidth(gateName(gate), '500 12px'), textWidth(whText(gate.wh), '700 15px') + 22)

const Key = ({ hasRange }: { hasRange: boolean }) => (
  <p class="key">
    <span>
      <svg width="22" height="12" aria-hidden="true">
        <path d="M0 6h22" stroke="var(--bal)" stroke-width="2.5" stroke-dasharray="7 3.5" />
      </svg>
      Battery planned, Wh
    </span>
    {hasRange && (
      <span>
        <svg width="22" height="12" aria-hidden="true">
          <path d="M0 1.5h22M0 10.5h22" stroke="var(--ink)" stroke-width="1.25" />
        </svg>
        likely range
      </span>
    )}
    <span>
      <svg width="22" height="12" aria-hidden="true">
        <path d="M0 4.4h22M0 7.6h22" stroke="var(--floor)" stroke-width="1.4" />
      </svg>
      reserve
    </span>
    <span>
      <svg width="16" height="12" aria-hidden="true">
        <rect width="16" height="12" fill="url(#hatch)" />
      </svg>
      over the limit
    </span>
  </p>
)

/** Ruling for what is still to come. */
const ToCome = () => (
  <defs>
    <pattern id="rule-come" width="8" height="7" patternUnits="userSpaceOnUse">
      <path d="M0 3.5H8" stroke="var(--hair)" stroke-width="1" />
    </pattern>
  </defs>
)

function Still({ day, axis, top }: { day: DayBudget; axis: Axis; top: number }) {
  return (
    <g>
      <rect x="0" y={top} width={axis.width} height={TRACKS.battery} fill="url(#rule-come)" />
      {day.spans
        .filter(({ kind }) => kind === 'stop')
        .map((span) => {
          const from = axis.x(Date.parse(span.from))
          const to = Math.max(from + 1, axis.x(Date.parse(span.to)))
          return (
            <>
              <rect x={from} y={top} width={to - from} height={TRACKS.road} fill="var(--sunk)" />
              <path d={`M${from} ${top}v${TRACKS.road}M${to} ${top}v${TRACKS.road}`} stroke="var(--ink-3)" />
            </>
          )
        })}
    </g>
  )
}

function Battery({ plan, axis, top, width }: TrackProps) {
  const { budget } = plan.forPeople
  const { capacityWh, reserve } = budget
  const y = energyY(capacityWh, top)
  const fan = useMemo(() => fanPaths(fanPoints(plan), axis, energyY(capacityWh, top)), [plan, axis, top])
  const d = useMemo(() => batteryPath(budget, axis, top), [budget, axis, top])
  const floorY = y(reserve.wh)
  const words = `Reserve ${grouped(round10(reserve.wh))}${THIN}Wh`
  return (
    <g fill="none" stroke-linejoin="round">
      <path d={fan.fill} fill="var(--fan)" fill-opacity="var(--fan-o)" />
      <path d={fan.edges} stroke="var(--ink)" stroke-width="1.25" data-side="range" />
      <path
        d={`M0 ${floorY - 1.6}H${axis.width}M0 ${floorY + 1.6}H${axis.width}`}
        stroke="var(--floor)"
        stroke-width="1.4"
      />
      <text x="2" y={floorY + 15} class="fl halo">
        {words}
      </text>
      <path d={d} stroke="var(--paper)" stroke-width="5.5" />
      <path d={d} stroke="var(--bal)" stroke-width="2.5" stroke-dasharray="7 3.5" data-side="battery" />
      <path d={`M0 ${top + TRACKS.battery}H${axis.width}`} stroke="var(--ink)" stroke-width="1.25" />
      {energyTicks(capacityWh).map((wh) => (
        <>
          <path d={`M${axis.width} ${y(wh)}h4`} stroke="var(--ink-3)" />
          <text x={width} y={y(wh) + (wh === 0 ? 0 : 4)} class="ax" text-anchor="end">
            {grouped(wh)}
          </text>
        </>
      ))}
    </g>
  )
}

/** Two or three round energies up to a full pack. */
function energyTicks(capacityWh: number): number[] {
  const every = [100, 200, 500, 1000, 2000, 5000, 10_000].find((step) => capacityWh / step <= 5.2) ?? 20_000
  return Array.from({ length: Math.floor(capacityWh / every) + 1 }, (_, i) => i * every)
}

function Speed({ plan, axis, top, width }: TrackProps) {
  const drives = useMemo(() => driveSpeeds(plan), [plan])
  if (drives.length === 0) return null
  const span = speedSpan(drives)
  const y = speedY(span, top)
  return (
    <g>
      <text x="0" y={top + TRACKS.speedTop - 8} class="ax">
        Planned speed, km/h
      </text>
      {drives.map((drive) => {
        const { held, over } = speedPaths(drive, axis, y, top)
        return (
          <>
            <path d={over} fill="url(#hatch)" stroke="var(--ink-3)" stroke-width="1" data-side="limit" />
            <path d={held} fill="none" stroke="var(--ink)" stroke-width="2.25" data-side="held" />
          </>
        )
      })}
      {speedLabels(plan, axis, y).map((label) => (
        <text x={label.x} y={label.y} class="sp halo" text-anchor="middle">
          {label.text}
        </text>
      ))}
      {[span.lowKmh, span.highKmh].map((kmh) => (
        <text x={width} y={y(kmh) + (kmh === span.lowKmh ? 0 : 8)} class="ax" text-anchor="end">
          {kmh}
        </text>
      ))}
    </g>
  )
}

function Names({ lane, top }: { lane: Lane; top: number }) {
  const base = (tier: number): number => (lane.tiers - 1 - tier) * TIER_PX
  return (
    <g>
      {lane.labels.map(({ gate, gateX, x, tier }) => (
        <>
          {tier > 0 && <path d={`M${gateX} ${base(tier) + 33}V${top}`} stroke="var(--ink-3)" />}
          <text x={x} y={base(tier) + 12} class="pl halo" text-anchor="middle">
            {gateName(gate)}
          </text>
          <text x={x} y={base(tier) + 30} class="gl halo" text-anchor="middle">
            {whText(gate.wh)}
            <tspan class="gu">{`${THIN}Wh`}</tspan>
          </text>
        </>
      ))}
    </g>
  )
}

/** The chart in words, for those who do not see it. */
function chartText({ forPeople: { budget, closingWh, arriveAt }, ranges }: Planned): string {
  const gates = (ranges?.gates ?? [])
    .filter(({ name }) => !name.startsWith('km '))
    .map(({ name, at, plannedWh, wh }) => `${name} ${clock(at)} ${whText(plannedWh)} watt hours, likely ${whRange(wh)}`)
  return (
    `Plan over the road: battery, held speed under the posted limits, road height. ${gates.join('; ')}. ` +
    `Arrive ${clock(arriveAt)}, close with ${whText(closingWh)} watt hours; reserve ${whText(budget.reserve.wh)}. ` +
    'The same as tables follows.'
  )
}
