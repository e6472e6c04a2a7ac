import type { ComponentChildren } from 'preact'
import { signOut } from '../session.ts'
import { theme, type Theme } from '../theme.ts'
import { choice, choose, lists, refusal } from '../state.ts'
import { AddRace } from './add-race.tsx'
import { AddRoute } from './add-route.tsx'
import { AddSky } from './add-sky.tsx'
import { CompareSkies } from './compare-skies.tsx'
import { DocumentList } from './document-list.tsx'
import { JsonDocument } from './json-document.tsx'

const THEMES: { id: Theme; text: string }[] = [
  { id: 'phone', text: 'As the phone' },
  { id: 'noon', text: 'Noon' },
  { id: 'lamp', text: 'Lamp' },
]

/** What the budget is worked out from: race, car, sky and the routes behind the race. */
export function SetUp() {
  const all = lists.value
  return (
    <div class="set-up">
      <h1 class="title pad">Set-up</h1>
      {all === null && (
        <p class="pad">{refusal.value === null ? 'Reading what is stored.' : `Not read: ${refusal.value.detail}`}</p>
      )}
      {all !== null && (
        <>
          <Part title="Race" note="The days, hours and stages">
            <DocumentList
              kind="races"
              items={all.races}
              chosen={choice.value.race}
              onChoose={(race) => choose({ race, date: '' })}
            />
            <AddRace routes={all.routes} />
            <JsonDocument kind="races" word="race" items={all.races} onSaved={(race) => choose({ race, date: '' })} />
          </Part>
          <Part title="Car" note="Body, array, trackers, pack">
            <DocumentList kind="cars" items={all.cars} chosen={choice.value.car} onChoose={(car) => choose({ car })} />
            <JsonDocument kind="cars" word="car" items={all.cars} onSaved={(car) => choose({ car })} />
            <nav class="links" aria-label="Tests of the car">
              <a href={`#/coast-down${location.hash.replace(/^[^?]*/, '')}`}>
                Coast-down: find rolling and drag from a log
              </a>
            </nav>
            <p class="note caution">
              Packs and arrays carry lethal direct voltage; licensed electrical practice comes first.
            </p>
          </Part>
          <Part title="Sky" note="The weather along the route">
            <DocumentList
              kind="skies"
              items={all.skies}
              chosen={choice.value.sky}
              onChoose={(sky) => choose({ sky })}
            />
            <AddSky />
            <CompareSkies skies={all.skies} />
          </Part>
          <Part title="Routes" note="The roads that races run on">
            <DocumentList kind="routes" items={all.routes} />
            <AddRoute />
          </Part>
        </>
      )}
      <Part title="Look" note="Noon for the sun, Lamp for the night">
        <div class="seg" role="group" aria-label="Theme">
          {THEMES.map(({ id, text }) => (
            <button type="button" aria-pressed={theme.value === id} onClick={() => (theme.value = id)}>
              {text}
            </button>
          ))}
        </div>
      </Part>
      <Part title="More" note="">
        <nav class="links" aria-label="Documentation">
          <a href="/api/docs">How to ask the service directly, with worked examples</a>
          <a href="/api/openapi.json">Its description as OpenAPI 3.1</a>
        </nav>
        <button type="button" class="quiet" onClick={() => void signOut()}>
          Sign out of this browser
        </button>
      </Part>
    </div>
  )
}

interface PartProps {
  title: string
  note: string
  children: ComponentChildren
}

function Part({ title, note, children }: PartProps) {
  const id = `part-${title.toLowerCase()}`
  return (
    <section class="sec pad" aria-labelledby={id}>
      <div class="sech">
        <h2 id={id}>{title}</h2>
        <span class="note">{note}</span>
      </div>
      {children}
    </section>
  )
}
