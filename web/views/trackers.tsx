import { useEffect } from 'preact/hooks'
import { CurveChart, curveText, markOf } from '../charts/curve.tsx'
import { believe } from '../crew.ts'
import { loadMoves, loadTrackers, news, trackers, trackersRefusal } from '../crew-state.ts'
import type { TrackerReport, Trackers } from '../crew-types.ts'
import { dayText, grouped, THIN, whText } from '../format.ts'
import { pct1 } from '../log-reading.ts'
import { askAgain, choice } from '../state.ts'
import { isTaken, outsideText, standingOf, trackersSentence, untold, usedCurve } from '../tracker-words.ts'
import { Conflict } from './conflict.tsx'
import { Say, Wh } from './figures.tsx'
import { History } from './history.tsx'
import { Readings } from './readings.tsx'
import { Ruling } from './ruling.tsx'

/** Each tracker as bench and readings show it: its curve, where the day's energy fell, what a point is worth. */
export function TrackersView() {
  const { race, date, car } = choice.value
  const isKnown = race !== '' && date !== '' && car !== ''
  useEffect(() => {
    if (!isKnown) return
    void loadTrackers({ race, date }, car)
    void loadMoves(race)
  }, [race, date, car, news.value])
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
      </div>
      {all.items.map((report) => (
        <One key={report.name} report={report} all={all} race={race} onChange={reload} />
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

interface OneProps {
  report: TrackerReport
  all: Trackers
  race: string
  onChange: () => void
}

function One({ report, all, race, onChange }: OneProps) {
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
      {report.day === null ? (
        <p class="note gap">What it is worth shows once a day is followed.</p>
      ) : (
        <Worth report={report} />
      )}
      <Readings report={report} race={race} onChange={onChange} />
    </section>
  )
}

function Worth({ report }: { report: TrackerReport }) {
  const { day } = report
  if (day === null) return null
  return (
    <dl class="facts three">
      <div>
        <dt>Share of the day</dt>
        <dd>
          <Wh text={whText(day.wh)} unit="Wh" />
        </dd>
        <dd class="note">
          {grouped(day.sharePct)}
          {THIN}%{day.wh > 0 && `, at ${pct1(day.meanEfficiencyPct)}${THIN}%`}
        </dd>
      </div>
      <div>
        <dt>Outside window</dt>
        <dd>
          <Wh text={grouped(day.outsideMin)} unit="min" />
        </dd>
        <dd class="note">{outsideText(day)}</dd>
      </div>
      <div>
        <dt>One point better</dt>
        <dd>
          <Wh text={`+${grouped(day.onePointWh)}`} unit="Wh" />
        </dd>
        <dd class="note">at the close</dd>
      </div>
    </dl>
  )
}
