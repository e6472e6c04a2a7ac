import { useSignal } from '@preact/signals'
import { useMemo } from 'preact/hooks'
import type { DayBudget } from '../../server/documents/budget.ts'
import { clockAt, clockOn, grouped, round10, THIN } from '../format.ts'
import { Wh } from '../views/figures.tsx'
import { type Axis, type AxisMode, bandAxis } from './axis.ts'
import { powerBins, type Reading, readingAt } from './band.ts'
import { Plot } from './band-plot.tsx'
import { gateWords } from './gate-words.ts'
import { textWidth } from './text-width.ts'
import { useWidth } from './use-width.ts'

/** Room beside the plot for the battery’s scale. [px] */
const scaleRoom = (): number => Math.ceil(textWidth(`100${THIN}%`, '400 12px')) + 7

/** Harvest, spending and battery on one axis from dawn to dusk, over the road’s height. */
export function DayBand({ day }: { day: DayBudget }) {
  const mode = useSignal<AxisMode>('time')
  const { frame, width } = useWidth()
  const readMs = useSignal<number | null>(null)
  const axis = useMemo(() => bandAxis(day, mode.value, width - scaleRoom()), [day, mode.value, width])
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
        <Plot day={day} axis={axis} width={width} reading={reading} onRead={(ms) => (readMs.value = ms)} />
      </div>
      <ReadSlider day={day} axis={axis} atMs={at} onRead={(ms) => (readMs.value = ms)} />
      <p class="note">
        Ruled is to come: one forecast, without a range. {mode.value === 'distance' && 'Still hours are folded. '}
        Grey is a stop. W above and below the middle line on one scale; battery charge in % by the right edge.
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
        Battery <Wh text={grouped(shown.chargePct)} unit="% charge" />
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
    `out ${grouped(round10(reading.outW))} W, battery ${grouped(reading.chargePct)} % charge`
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
            <th scope="col">% charge</th>
            <th scope="col">% energy</th>
          </tr>
        </thead>
        <tbody>
          {day.gates.map((gate) => (
            <tr class="row">
              <th scope="row">{gateWords(gate)}</th>
              <td>{clockOn(gate.at, day.utcOffsetMin)}</td>
              <td>{grouped(gate.km)}</td>
              <td data-wh={gate.wh}>{grouped(round10(gate.wh))}</td>
              <td>{grouped(gate.chargePct)}</td>
              <td>{grouped(gate.energyPct)}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </details>
  )
}
