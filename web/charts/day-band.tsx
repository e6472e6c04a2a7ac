import { useSignal } from '@preact/signals'
import { useLayoutEffect, useMemo, useRef } from 'preact/hooks'
import type { DayBudget } from '../../server/documents/budget.ts'
import { clockAt, grouped, round10, THIN } from '../format.ts'
import { Wh } from '../views/figures.tsx'
import { type Axis, type AxisMode, bandAxis } from './axis.ts'
import { chargePath, chargeY, mostW, PLOT, powerBins, powerPath, type Reading, readingAt, roadHeight } from './band.ts'
import { gateLane, type Lane, TIER_PX } from './lane.ts'
import { textWidth } from './text-width.ts'

type Gate = DayBudget['gates'][number]

/** Room beside the plot for the battery’s scale. [px] */
const scaleRoom = (): number => Math.ceil(textWidth(`100${THIN}%`, '400 12px')) + 7

/** Harvest, spending and battery on one axis from dawn to dusk, over the road’s height. */
export function DayBand({ day }: { day: DayBudget }) {
  const mode = useSignal<AxisMode>('time')
  const width = useSignal(358)
  const readMs = useSignal<number | null>(null)
  const frame = useRef<HTMLDivElement>(null)
  useLayoutEffect(() => {
    const element = frame.current
    if (element === null) return undefined
    const watch = new ResizeObserver(() => (width.value = Math.max(240, element.clientWidth)))
    watch.observe(element)
    return () => watch.disconnect()
  }, [])
  const axis = useMemo(() => bandAxis(day, mode.value, width.value - scaleRoom()), [day, mode.value, width.value])
  const at = readMs.value !== null && readMs.value >= axis.fromMs && readMs.value <= axis.toMs ? readMs.value : null
  const reading = at === null ? null : readingAt(day, at)
  return (
    <section class="sec pad" aria-labelledby="band-title">
      <div class="sech">
        <h2 id="band-title">Day band</h2>
        <div class="seg" role="group" aria-label="Axis of the day band">
          {(['time', 'distance'] as const).map((choice) => (
            <button type="button" aria-pressed={mode.value === choice} onClick={() => (mode.value = choice)}>
              {choice === 'time' ? 'Time' : 'Distance'}
            </button>
          ))}
        </div>
      </div>
      <Key day={day} reading={reading} />
      <div class="bandframe" ref={frame}>
        <Plot day={day} axis={axis} width={width.value} reading={reading} onRead={(ms) => (readMs.value = ms)} />
      </div>
      <ReadSlider day={day} axis={axis} atMs={at} onRead={(ms) => (readMs.value = ms)} />
      <p class="note">
        Ruled is to come: one forecast, without a range. {mode.value === 'distance' && 'Still hours are folded. '}
        Grey is a stop. W above and below the middle line on one scale; battery by the right edge.
      </p>
      <GateTable day={day} />
    </section>
  )
}

function Key({ day, reading }: { day: DayBudget; reading: Reading | null }) {
  const bins = useMemo(() => powerBins(day), [day])
  const most = (w: number): string => grouped(round10(w))
  const peak = { inW: Math.max(...bins.map((bin) => bin.inW)), outW: Math.max(...bins.map((bin) => bin.outW)) }
  const shown = reading ?? { ...peak, chargePct: day.closing.chargePct }
  const word = reading === null ? 'to ' : ''
  return (
    <p class="key" aria-live="off">
      <span>
        <Swatch side="in" />
        In {word}
        <Wh text={most(shown.inW)} unit="W" />
      </span>
      <span>
        <Swatch side="out" />
        Out {word}
        <Wh text={most(shown.outW)} unit="W" />
      </span>
      <span>
        <svg width="22" height="12" aria-hidden="true">
          <path d="M0 6h22" stroke="var(--bal)" stroke-width="2.5" stroke-dasharray="7 3.5" />
        </svg>
        Battery <Wh text={grouped(shown.chargePct)} unit="%" />
      </span>
    </p>
  )
}

const Swatch = ({ side }: { side: 'in' | 'out' }) => (
  <svg width="16" height="12" aria-hidden="true">
    <path
      d={side === 'in' ? 'M1 11.5V2.5h7V.8h7v10.7z' : 'M1 .8v7h7v3.4h7V.8z'}
      fill={`url(#rule-${side}-bar)`}
      stroke={`var(--${side}-edge)`}
      stroke-width="1.5"
    />
  </svg>
)

interface PlotProps {
  day: DayBudget
  axis: Axis
  width: number
  reading: Reading | null
  onRead: (ms: number) => void
}

function Plot({ day, axis, width, reading, onRead }: PlotProps) {
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

function Stops({ day, axis, top }: { day: DayBudget; axis: Axis; top: number }) {
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

function Power({ day, axis, zero }: { day: DayBudget; axis: Axis; zero: number }) {
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

function Reserve({ day, axis, top }: { day: DayBudget; axis: Axis; top: number }) {
  const y = chargeY(top)(day.reserve.chargePct)
  return (
    <g>
      <path d={`M0 ${y - 1.6}H${axis.width}M0 ${y + 1.6}H${axis.width}`} stroke="var(--floor)" stroke-width="1.4" />
      <text x="0" y={y + 16} class="fl">
        {`Reserve ${grouped(day.reserve.chargePct)}${THIN}%, ${grouped(round10(day.reserve.wh))}${THIN}Wh`}
      </text>
    </g>
  )
}

function Battery({ day, axis, top, lane }: { day: DayBudget; axis: Axis; top: number; lane: Lane }) {
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

function LaneNames({ lane, top }: { lane: Lane; top: number }) {
  return (
    <g>
      {lane.labels.map(({ gate, gateX, x, tier }) => {
        const base = (lane.tiers - 1 - tier) * TIER_PX
        return (
          <>
            {tier > 0 && <path d={`M${gateX} ${base + 33}V${top}`} stroke="var(--ink-3)" />}
            <text x={x} y={base + 12} class="pl" text-anchor="middle">
              {gateName(gate)}
            </text>
            <text x={x} y={base + 30} class="gl" text-anchor="middle">
              {grouped(gate.chargePct)}
              <tspan class="gu">{`${THIN}%`}</tspan>
            </text>
          </>
        )
      })}
    </g>
  )
}

function Scale({ axis, top, width }: { axis: Axis; top: number; width: number }) {
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

function Road({ day, axis, top }: { day: DayBudget; axis: Axis; top: number }) {
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

function Cursor({ x, top, text }: { x: number; top: number; text: string }) {
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

interface SliderProps {
  day: DayBudget
  axis: Axis
  atMs: number | null
  onRead: (ms: number) => void
}

/** Reads the band at any instant, by finger or by keyboard. */
function ReadSlider({ day, axis, atMs, onRead }: SliderProps) {
  const reading = readingAt(day, atMs ?? axis.fromMs)
  const text =
    `${clockAt(reading.atMs, day.utcOffsetMin)}, km ${grouped(reading.km)}, in ${grouped(round10(reading.inW))} W, ` +
    `out ${grouped(round10(reading.outW))} W, battery ${grouped(reading.chargePct)} %`
  return (
    <label class="read">
      <span class="note">
        {atMs === null ? (
          'Slide to read the band at an instant'
        ) : (
          <>
            {clockAt(atMs, day.utcOffsetMin)}, km {grouped(reading.km)}, {grouped(reading.speedKmh)}
            {THIN}km/h, <Wh text={grouped(round10(reading.wh))} unit="Wh" />
          </>
        )}
      </span>
      <input
        type="range"
        min={axis.fromMs}
        max={axis.toMs}
        step={300_000}
        value={atMs ?? axis.fromMs}
        aria-label="Instant to read"
        aria-valuetext={text}
        onInput={(event) => onRead(Number(event.currentTarget.value))}
      />
    </label>
  )
}

function GateTable({ day }: { day: DayBudget }) {
  return (
    <details class="more">
      <summary>The band as a table</summary>
      <table class="led">
        <caption class="sr">Places and instants of the day with the battery there</caption>
        <thead>
          <tr>
            <th scope="col">Place</th>
            <th scope="col">At</th>
            <th scope="col">km</th>
            <th scope="col">Wh</th>
            <th scope="col">%</th>
          </tr>
        </thead>
        <tbody>
          {day.gates.map((gate) => (
            <tr class="row">
              <th scope="row">{gateWords(gate)}</th>
              <td>{clockAt(Date.parse(gate.at), day.utcOffsetMin)}</td>
              <td>{grouped(gate.km)}</td>
              <td data-wh={gate.wh}>{grouped(round10(gate.wh))}</td>
              <td>{grouped(gate.chargePct)}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </details>
  )
}

const gateName = (gate: Gate): string => (gate.kind === 'dawn' ? 'Dawn' : gate.kind === 'dusk' ? 'Dusk' : gate.name)

const gateWords = (gate: Gate): string =>
  gate.kind === 'depart' ? `Leave ${gate.name}` : gate.kind === 'start' ? `Start, ${gate.name}` : gateName(gate)

const gateWidth = (gate: Gate): number =>
  Math.max(textWidth(gateName(gate), '500 12px'), textWidth(grouped(gate.chargePct), '700 15px') + 16)

function bandText(day: DayBudget): string {
  const lowest = `lowest ${grouped(day.lowest.chargePct)} percent near ${day.lowest.place}`
  const gates = day.gates.map((gate) => `${gateWords(gate)} ${grouped(gate.chargePct)} percent`).join(', ')
  return (
    `Day band. Harvest above the middle line, spending below it, battery dashed from 0 to 100 percent. ${gates}; ` +
    `${lowest}; reserve at ${grouped(day.reserve.chargePct)} percent. The same as a table follows.`
  )
}
