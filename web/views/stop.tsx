import { signal } from '@preact/signals'
import { useEffect } from 'preact/hooks'
import type { PointingDay, PointingWindow } from '../../server/documents/pointing.ts'
import { followedOn, news } from '../crew-state.ts'
import { clock, dayText, stampIn, whText } from '../format.ts'
import { loadPointing, pointingOn, pointingRefusal, type Pointing } from '../pointing-state.ts'
import { nowMs } from '../shown.ts'
import { choice, choose } from '../state.ts'
import {
  costText,
  endText,
  firstHold,
  firstToCome,
  NOTHING,
  poseSentence,
  utcText,
  windowNames,
} from '../stop-words.ts'
import '../style/stop.css'
import { Conflict } from './conflict.tsx'
import { Say, Wh } from './figures.tsx'
import { Ruling } from './ruling.tsx'
import { StopBar } from './stop-bar.tsx'
import { Point } from './stop-point.tsx'
import { Holds, OffCosts } from './stop-table.tsx'
import { Tabs } from './tabs.tsx'

/** What somebody looked at on a day; the next to come where nobody chose. */
const looked = signal<{ date: string; window: number | null; hold: number | null }>({
  date: '',
  window: null,
  hold: null,
})

/** Where to point the array in the morning, at stops and in the evening of the followed day. */
export function StopView() {
  const { race, date } = choice.value
  const isFollowed = (followedOn({ race, date })?.choice ?? null) !== null
  useEffect(() => {
    if (isFollowed) void loadPointing({ race, date })
  }, [race, date, isFollowed, news.value])
  const known = isFollowed ? pointingOn({ race, date }) : null
  const { value: why } = pointingRefusal
  return (
    <div class="stop">
      {isFollowed && why !== null && (
        <div class="pad gap">
          <Conflict refusal={why} />
        </div>
      )}
      {!isFollowed && <NotFollowed date={date} />}
      {isFollowed && known === null && why === null && <Waiting />}
      {known !== null && <Day of={known} />}
    </div>
  )
}

const Waiting = () => (
  <div class="pad">
    <h1 class="say">Working out where to point the array.</h1>
    <Ruling />
  </div>
)

function NotFollowed({ date }: { date: string }) {
  return (
    <div class="pad">
      <h1 class="say">Nothing to point yet.</h1>
      <p>
        No budget is followed{date === '' ? '' : ` on ${dayText(date)}`}. Poses go by the budget that the crew follows.
      </p>
      <div class="steps">
        <button type="button" class="btn" onClick={() => choose({ view: 'day' })}>
          Go to the day
        </button>
      </div>
    </div>
  )
}

function Day({ of }: { of: Pointing }) {
  const { day, date } = of
  if (day.noWindow !== null)
    return (
      <div class="pad">
        <h1 class="say">Nothing to point on {dayText(date)}.</h1>
        <p>{NOTHING[day.noWindow]}</p>
      </div>
    )
  const own = looked.value.date === date ? looked.value : { date, window: null, hold: null }
  const w = own.window ?? firstToCome(day.windows, nowMs.value)
  const window = day.windows[w]
  const h = own.hold ?? firstHold(window.holds, nowMs.value)
  return (
    <>
      <div class="pad">
        <Tabs
          label="Windows"
          chosen={String(w)}
          items={windowNames(day.windows).map((text, i) => ({ id: String(i), text }))}
          onChoose={(id) => (looked.value = { date, window: Number(id), hold: null })}
        />
      </div>
      <Window window={window} index={h} onHold={(hold) => (looked.value = { date, window: w, hold })} />
      <Cautions day={day} madeAt={of.madeAt} />
    </>
  )
}

interface WindowProps {
  window: PointingWindow
  index: number
  onHold: (index: number) => void
}

function Window({ window, index, onHold }: WindowProps) {
  const hold = window.holds[index]
  return (
    <>
      <div class="pad">
        <h1 class="say" id="stop-say">
          <Say phrase={poseSentence(hold)} />
        </h1>
      </div>
      <Clock window={window} />
      <Point window={window} index={index} hold={hold} />
      <OffCosts window={window} index={index} />
      <Holds window={window} index={index} onHold={onHold} />
    </>
  )
}

/** When the array goes up and comes down, when the car leaves, and what the window brings. */
function Clock({ window }: { window: PointingWindow }) {
  const { total, to } = window
  return (
    <section class="pad" aria-label={`${endText(window)} ${clock(to)}`}>
      <div class="leave">
        <p>{endText(window)}</p>
        <p class="at">{clock(to)}</p>
        <p class="note">{utcText(to)}</p>
      </div>
      <StopBar window={window} nowMs={nowMs.value} />
      <dl class="facts three">
        <div>
          <dt>At the strings</dt>
          <dd>
            <Wh text={whText(total.best.harvestWh)} unit="Wh" wh={total.best.harvestWh} />
          </dd>
        </div>
        <div>
          <dt>Into the pack</dt>
          <dd>
            <Wh text={whText(total.best.packWh)} unit="Wh" wh={total.best.packWh} />
          </dd>
        </div>
        <div>
          <dt>Left flat costs</dt>
          <dd>
            <Wh text={costText(total.flat.costPackWh)} unit="Wh" wh={total.flat.costPackWh} />
          </dd>
        </div>
      </dl>
    </section>
  )
}

function Cautions({ day, madeAt }: { day: PointingDay; madeAt: string }) {
  return (
    <section class="sec pad" aria-labelledby="care-title">
      <div class="sech">
        <h2 id="care-title">Before you lift it</h2>
      </div>
      <ul class="plain">
        {day.cautions.map((text) => (
          <li>{text}</li>
        ))}
      </ul>
      <p class="note gap">
        A forecast, by the budget made {stampIn(day.zone, Date.parse(madeAt))}. Times are local, azimuths from true
        north.
      </p>
    </section>
  )
}
