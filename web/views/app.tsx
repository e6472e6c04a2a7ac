import { useEffect } from 'preact/hooks'
import { Mark } from '../charts/mark.tsx'
import { Rulings } from '../charts/bar.tsx'
import { ageAmount, clockAt, dayText, offsetText, zoneOffsetMin } from '../format.ts'
import { nowMs } from '../shown.ts'
import { choice, days, isHeard, lastHeardMs, lists, refusal, worked, workingSinceMs } from '../state.ts'
import { standing } from '../session.ts'
import { DayView } from './day.tsx'
import { Landing } from './landing.tsx'
import { late } from './late.tsx'
import type { View } from '../choice.ts'
import { Wh } from './figures.tsx'
import { Disc } from '../charts/disc.tsx'

/** The strip of lost contact shows after this time. [ms] */
const STRIP_AFTER_MS = 15_000
/** Work shorter than this is not worth a word. [ms] */
const QUIET_MS = 700

export function App() {
  const { value } = standing
  const isThere = worked.value !== null || refusal.value !== null
  useEffect(() => (isThere ? fetchRoadside() : undefined), [isThere])
  if (value !== null && value !== 'inside') return <Landing standing={value} />
  const Screen = VIEWS[choice.value.view]
  return (
    <>
      <Rulings />
      <Top />
      <Strip />
      <main id="main" class="phone">
        <Screen />
      </main>
      <Tabs />
    </>
  )
}

const loadLog = async () => (await import('./log.tsx')).LogView
const loadStop = async () => (await import('./stop.tsx')).StopView
const loadHere = async () => (await import('./here.tsx')).HereView
const keepOffline = async () => (await import('../phone/offline.ts')).goOffline()
/** What the roadside needs comes along once the day is there. [ms] */
const ROADSIDE_AFTER_MS = 4000
const fetchRoadside = (): void => {
  for (const load of [loadLog, loadStop, loadHere, keepOffline])
    setTimeout(() => load().catch(() => undefined), ROADSIDE_AFTER_MS)
}

/** Screens that are not needed at once are fetched when they are opened. */
const VIEWS = {
  day: DayView,
  here: late(loadHere),
  tonight: late(async () => (await import('./tonight.tsx')).TonightView),
  'race-plan': late(async () => (await import('./race-plan.tsx')).RacePlanView),
  stop: late(loadStop),
  log: late(loadLog),
  trackers: late(async () => (await import('./trackers.tsx')).TrackersView),
  'set-up': late(async () => (await import('./set-up.tsx')).SetUp),
  'coast-down': late(async () => (await import('./coast-down.tsx')).CoastDownView),
}

function Top() {
  const race = lists.value?.races.find((item) => item.id === choice.value.race)
  const day = days.value.find((item) => item.date === choice.value.date)
  const offsetMin =
    day === undefined ? -new Date(nowMs.value).getTimezoneOffset() : zoneOffsetMin(day.zone, nowMs.value)
  const isOfDay = day !== undefined && choice.value.view !== 'race-plan'
  const where = [race?.name ?? 'Stagewatt', ...(isOfDay ? [dayText(day.date)] : [])].join(', ')
  useEffect(() => {
    document.title = race === undefined ? where : `${where}, Stagewatt`
  }, [where])
  return (
    <header class="top">
      <Mark />
      <span class="where">{where}</span>
      <span class="clock">
        {clockAt(Math.floor(nowMs.value / 60_000) * 60_000, offsetMin)}
        <span class="u">{offsetText(offsetMin)}</span>
      </span>
    </header>
  )
}

/** Lost contact, or work that takes long enough to say so. */
function Strip() {
  const lostMs = nowMs.value - lastHeardMs.value
  const since = workingSinceMs.value
  return (
    <div role="status">
      {!isHeard.value && lostMs > STRIP_AFTER_MS && <Lost ms={lostMs} />}
      {isHeard.value && since !== null && nowMs.value - since > QUIET_MS && <Working ms={nowMs.value - since} />}
    </div>
  )
}

function Lost({ ms }: { ms: number }) {
  const { text, unit } = ageAmount(ms)
  return (
    <p class="link">
      <svg
        width="20"
        height="20"
        viewBox="0 0 20 20"
        fill="none"
        stroke="var(--ink)"
        stroke-width="1.8"
        stroke-linecap="round"
        aria-hidden="true"
      >
        <path d="M2.5 8.5a10 10 0 0 1 4-2.4M17.5 8.5a10 10 0 0 0-4-2.4M5.5 12a6 6 0 0 1 2-1.3M14.5 12a6 6 0 0 0-2-1.3" />
        <circle cx="10" cy="15.5" r="1.3" fill="var(--ink)" stroke="none" />
        <path d="M10 3v8.5" stroke-dasharray=".1 3.8" stroke-width="2" />
      </svg>
      <span>
        <b>
          Offline <Wh text={text} unit={unit} />
        </b>
        , showing what was last worked out
      </span>
    </p>
  )
}

function Working({ ms }: { ms: number }) {
  const { text, unit } = ageAmount(ms)
  const last = worked.value
  return (
    <p class="link ok">
      <Disc age="ageing" />
      <span>
        Working out the day, <Wh text={text} unit={unit} />
        {last !== null && `; shown is ${clockAt(last.atMs, last.day.utcOffsetMin)}`}
      </span>
    </p>
  )
}

/** The tab that a screen without one of its own belongs to. */
const STANDS_UNDER: Partial<Record<View, View>> = { here: 'day', 'race-plan': 'tonight', 'coast-down': 'set-up' }
const standsUnder = (view: View): View => STANDS_UNDER[view] ?? view

const TABS = [
  { view: 'day', name: 'Day', icon: 'M3 18h20M3 22h20M4 5l8 8 4-5 6 4' },
  { view: 'tonight', name: 'Tonight', icon: 'M21 16A9 9 0 1 1 11 4a7 7 0 0 0 10 12z' },
  { view: 'stop', name: 'Stop', icon: 'M4 22h18M13 22v-6M5 16l14-9 2 3L7 19z' },
  { view: 'log', name: 'Log', icon: 'M5 21l1-5L17 5l4 4L10 20zM14 8l4 4M4 24h18' },
  { view: 'trackers', name: 'Trackers', icon: 'M4 3v20h19M5 21C8 8 12 8 22 7M15 15l3 3-3 3-3-3z' },
  { view: 'set-up', name: 'Set-up', icon: 'M6 3h14v20H6zM6 9h14M6 13.5h14M6 18h14M10 3v20' },
] as const

function Tabs() {
  const { view } = choice.value
  return (
    <nav class="tabs" aria-label="Screens">
      <ul>
        {TABS.map((tab) => (
          <li>
            <a
              href={`#/${tab.view}${location.hash.replace(/^[^?]*/, '')}`}
              aria-current={standsUnder(view) === tab.view ? 'page' : undefined}
            >
              <svg
                width="26"
                height="26"
                viewBox="0 0 26 26"
                fill="none"
                stroke="currentColor"
                stroke-width="2"
                stroke-linejoin="round"
                stroke-linecap="round"
                aria-hidden="true"
              >
                <path d={tab.icon} />
              </svg>
              <span>{tab.name}</span>
            </a>
          </li>
        ))}
      </ul>
    </nav>
  )
}
