import { choose } from '../state.ts'

/** One day, or the days of the race together. */
export const PlanScope = ({ of }: { of: 'tonight' | 'race-plan' }) => (
  <div class="scope pad">
    <div class="seg" role="group" aria-label="What to plan">
      <button type="button" aria-pressed={of === 'tonight'} onClick={() => choose({ view: 'tonight' })}>
        One day
      </button>
      <button type="button" aria-pressed={of === 'race-plan'} onClick={() => choose({ view: 'race-plan' })}>
        Whole race
      </button>
    </div>
  </div>
)
