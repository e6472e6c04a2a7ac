import type { DayBudget } from '../../server/documents/budget.ts'
import type { SpeedsInput } from '../../server/documents/speeds.ts'
import { legSpeed, ownSpeed, withLeg } from '../legs.ts'
import { comparison } from '../sentence.ts'
import { before, choice, days, trySpeeds, workingSinceMs } from '../state.ts'
import { FollowPanel } from './follow-panel.tsx'
import { Stepper } from './stepper.tsx'

type Way = 'meet-target' | 'constant' | 'legs'

const WAYS: { way: Way; text: string }[] = [
  { way: 'meet-target', text: 'Fastest' },
  { way: 'constant', text: 'One speed' },
  { way: 'legs', text: 'By stage' },
]

/** A speed to try: the answer and what it changes follow at once. */
export function SpeedPanel({ day }: { day: DayBudget }) {
  const { speeds } = choice.value
  if (day.stages.length === 0)
    return (
      <section class="sec pad" aria-label="What is followed">
        <FollowPanel day={day} />
      </section>
    )
  return (
    <section class="sec pad speed" aria-labelledby="speed-title">
      <div class="sech">
        <h2 id="speed-title">Speed</h2>
        <div class="seg" role="group" aria-label="How the speed is set">
          {WAYS.filter(({ way }) => way !== 'legs' || day.stages.length > 1 || speeds.kind === 'legs').map(
            ({ way, text }) => (
              <button
                type="button"
                aria-pressed={speeds.kind === way}
                onClick={() => trySpeeds(turnedTo(way, speeds, day))}
              >
                {text}
              </button>
            ),
          )}
        </div>
      </div>
      {speeds.kind === 'legs' ? <Legs day={day} speeds={speeds} /> : <OneSpeed day={day} speeds={speeds} />}
      <Change day={day} />
      {speeds.kind !== 'meet-target' && days.value[0]?.date !== day.date && (
        <p class="note">The days before are driven at these speeds, too.</p>
      )}
      <FollowPanel day={day} />
    </section>
  )
}

/** The same speeds set in another way, so that nothing jumps when the way is turned. */
function turnedTo(way: Way, speeds: SpeedsInput, day: DayBudget): SpeedsInput {
  const speedKmh = ownSpeed(speeds, day.heldKmh, day.stages)
  if (way === 'meet-target') return { kind: 'meet-target' }
  if (way === 'constant') return { kind: 'constant', speedKmh }
  const legs = day.stages.map((stage) => ({ stage: stage.id, speedKmh }))
  return { kind: 'legs', speedKmh, legs }
}

/** One speed for the day; taking a step away from the fastest one holds that speed. */
function OneSpeed({ day, speeds }: { day: DayBudget; speeds: SpeedsInput }) {
  return (
    <Stepper
      label="Speed to hold"
      kmh={ownSpeed(speeds, day.heldKmh, day.stages)}
      onChange={(speedKmh) => trySpeeds({ kind: 'constant', speedKmh })}
    />
  )
}

function Legs({ day, speeds }: { day: DayBudget; speeds: Extract<SpeedsInput, { kind: 'legs' }> }) {
  return (
    <ul class="legs">
      {day.stages.map((stage) => (
        <li key={stage.id}>
          <span>
            {stage.name}
            {!stage.name.includes(stage.finish) && <span class="note"> to {stage.finish}</span>}
          </span>
          <Stepper
            label={`Speed on ${stage.name}`}
            kmh={legSpeed(speeds, stage.id)}
            onChange={(kmh) => trySpeeds(withLeg(speeds, stage.id, kmh))}
          />
        </li>
      ))}
    </ul>
  )
}

/** What the last try changed, or what the speed shown is. */
function Change({ day }: { day: DayBudget }) {
  const text = comparison(before.value, day)
  const isWaiting = workingSinceMs.value !== null
  return (
    <p class={isWaiting || text === null ? 'change waits' : 'change'} role="status" id="change">
      {text ?? standing(day)}
    </p>
  )
}

const standing = (day: DayBudget): string =>
  day.speedsTried > 0 && day.outcome.kind !== 'no-speed-meets-target'
    ? `The fastest that meets the ${day.target === null ? 'reserve' : 'target'}.`
    : 'Step to try another.'
