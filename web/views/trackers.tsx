import { type Signal, useSignal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import { CurveChart, curveText, markOf } from '../charts/curve.tsx'
import { WindowChart } from '../charts/window.tsx'
import { believe } from '../crew.ts'
import { loadMoves, loadTrackers, news, trackers, trackersRefusal } from '../crew-state.ts'
import type { TrackerReport, Trackers } from '../crew-types.ts'
import { dayText, grouped } from '../format.ts'
import { askAgain, choice } from '../state.ts'
import { hatchText, partText, priceText, workOf } from '../tracker-part.ts'
import { isTaken, standingOf, trackersSentence, untold, usedCurve } from '../tracker-words.ts'
import { Conflict } from './conflict.tsx'
import { SelectField } from './field.tsx'
import { Say } from './figures.tsx'
import { History } from './history.tsx'
import { Readings } from './readings.tsx'
import { Ruling } from './ruling.tsx'
import { Worth } from './worth.tsx'

/** Each tracker as bench and readings show it: its curve, where the day's energy fell, what a point is worth. */
export function TrackersView() {
  const { race, date, car, sky, speeds } = choice.value
  const isKnown = race !== '' && date !== '' && car !== ''
  useEffect(() => {
    if (!isKnown) return
    void loadTrackers({ race, date }, car, { sky, speeds })
    void loadMoves(race)
  }, [race, date, car, sky, JSON.stringify(speeds), news.value])
  const { value: all } = trackers
  const { value: why } = trackersRefusal
  return (
    <div class="trackers">
      {why !== null && (
        <div class="pad gap">
          <Conflict refusal={why} />
        </div>
      )}
      {all === null ? why === null && <Waiting /> : <All all={all} race={race} />}
    </div>
  )
}

const Waiting = () => (
  <div class="pad">
    <h1 class="say">Reading the trackers.</h1>
    <Ruling />
  </div>
)

function All({ all, race }: { all: Trackers; race: string }) {
  const part = useSignal(0)
  const reload = (): void => {
    news.value++
    askAgain()
  }
  return (
    <>
      <div class="pad">
        <h1 class="say" id="trackers-say">
          <Say phrase={trackersSentence(all)} />
        </h1>
        <Use all={all} race={race} onChange={reload} />
        <Part all={all} part={part} />
      </div>
      {all.items.map((report) => (
        <One key={report.name} report={report} all={all} race={race} part={part.value} onChange={reload} />
      ))}
      <History />
    </>
  )
}

const USES = [
  { use: 'learned', text: 'With readings' },
  { use: 'bench', text: 'Bench only' },
] as const

/** Which curve every forecast of the race goes by. */
function Use({ all, race, onChange }: { all: Trackers; race: string; onChange: () => void }) {
  return (
    <div class="sech">
      <span class="note">Forecasts go by</span>
      <div class="seg" role="group" aria-label="Curve of the forecasts">
        {USES.map(({ use, text }) => (
          <button
            type="button"
            aria-pressed={all.uses === use}
            onClick={() => void believe(race, use).then((answer) => answer.value && onChange())}
          >
            {text}
          </button>
        ))}
      </div>
    </div>
  )
}

/** Which part of the day the figures below are of. */
function Part({ all, part }: { all: Trackers; part: Signal<number> }) {
  const parts = all.work?.trackers[0]?.parts ?? []
  if (parts.length < 2) return null
  return (
    <>
      <SelectField
        label="Part of the day"
        value={String(Math.min(part.value, parts.length - 1))}
        options={parts.map((one, i) => [String(i), partText(one)] as const)}
        onChange={(value) => (part.value = Number(value))}
      />
      {all.work !== null && <p class="note">{priceText(all.work.price)}</p>}
      {all.isTried === true && <p class="note">Nobody follows this day yet: as tried at the speeds of Day.</p>}
    </>
  )
}

interface OneProps {
  report: TrackerReport
  all: Trackers
  race: string
  /** Which part of the day to show. */
  part: number
  onChange: () => void
}

function One({ report, all, race, part, onChange }: OneProps) {
  const marks = report.readings.map(markOf)
  const isRead = report.readings.some(isTaken)
  const hasBench = isRead && all.uses === 'learned'
  const id = `tracker-${report.name.replace(/\W+/g, '-')}`
  return (
    <section class="sec pad" aria-labelledby={id}>
      <div class="sech">
        <h2 id={id}>{report.name}</h2>
        <span class="note">{standingOf(report)}</span>
      </div>
      <div class="tracks">
        <div>
          <CurveChart
            label={curveText(report.name, marks)}
            inputW={report.inputW}
            maxW={report.maxW}
            curve={usedCurve(report, all)}
            {...(hasBench ? { bench: report.bench } : {})}
            {...(report.day === null ? {} : { fell: report.day.fell })}
            marks={marks}
          />
          <p class="note">
            Band and whiskers hold 95 of 100. {hasBench && 'Dashed is the bench. '}At {grouped(report.inputV)} V in,{' '}
            {grouped(report.outputV)} V out.{' '}
            {report.day !== null && `Below: where the Wh of ${dayText(report.day.date)} fell. `}
            {isRead && untold(report)}
          </p>
          {report.benchTold !== null && <p class="note">{report.benchTold}</p>}
        </div>
        <Day report={report} all={all} part={part} />
      </div>
      <Readings report={report} race={race} onChange={onChange} />
    </section>
  )
}

/** A tracker over a part of the day: where it worked, and what that is worth. */
function Day({ report, all, part }: Pick<OneProps, 'report' | 'all' | 'part'>) {
  const work = workOf(report.name, all.work)
  if (all.work === null || work === null)
    return <p class="note gap">What it is worth shows once the day is worked out.</p>
  const at = Math.min(part, work.parts.length - 1)
  return (
    <>
      <div>
        <WindowChart work={work} part={work.parts[at]} utcOffsetMin={all.work.utcOffsetMin} />
        <p class="note">{hatchText(work)}</p>
      </div>
      <Worth work={work} part={work.parts[at]} all={all.work} at={at} />
    </>
  )
}
