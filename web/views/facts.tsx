import type { DayBudget } from '../../server/documents/budget.ts'
import { clockOn, grouped, kmText, round10, THIN, whText } from '../format.ts'
import { printedLedger } from '../ledger-lines.ts'
import { shownMarginWh } from '../sentence.ts'
import { Wh } from './figures.tsx'

type Stage = DayBudget['stages'][number]

/** The day’s two facts: its lowest point, and what is left against the target or the reserve. */
export const DayFacts = ({ day }: { day: DayBudget }) => (
  <dl class="facts">
    <div>
      <dt>Lowest point</dt>
      <dd>
        <Wh text={whText(day.lowest.wh)} unit="Wh" wh={day.lowest.wh} />
      </dd>
      <dd class="note">
        {shares(day.lowest)}, {clockOn(day.lowest.at, day.utcOffsetMin)}, {placeText(day.lowest)}
      </dd>
    </div>
    {day.target !== null && day.targetMarginWh !== null ? (
      <AgainstTarget day={day} target={day.target} marginWh={day.targetMarginWh} />
    ) : (
      <AgainstReserve day={day} />
    )}
  </dl>
)

interface TargetProps {
  day: DayBudget
  target: DayBudget['opening']
  marginWh: number
}

function AgainstTarget({ day, target, marginWh }: TargetProps) {
  const shownWh = printedLedger(day.ledger).closing.shownWh - round10(target.wh)
  return (
    <div>
      <dt>Against the target</dt>
      <dd>
        <Wh text={grouped(Math.abs(shownWh))} unit={`Wh ${shownWh < 0 ? 'under' : 'over'}`} wh={marginWh} />
      </dd>
      <dd class="note">
        target {shares(target)}, {whText(target.wh)}
        {THIN}Wh at the day’s end
      </dd>
    </div>
  )
}

function AgainstReserve({ day }: { day: DayBudget }) {
  const shownWh = shownMarginWh(day)
  return (
    <div>
      <dt>Lowest against reserve</dt>
      <dd>
        <Wh text={grouped(Math.abs(shownWh))} unit={`Wh ${shownWh < 0 ? 'below' : 'above'}`} wh={day.marginWh} />
      </dd>
      <dd class="note">
        reserve {shares(day.reserve)}, {whText(day.reserve.wh)}
        {THIN}Wh
      </dd>
    </div>
  )
}

/** A stage’s two facts: the road of today, and what it moved the battery by. */
export function StageFacts({ stage, day }: { stage: Stage; day: DayBudget }) {
  const changeWh = round10(stage.closing.wh) - round10(stage.opening.wh)
  return (
    <dl class="facts">
      <div>
        <dt>Leg of today</dt>
        <dd>
          <Wh text={kmText(stage.drivenKm)} unit="km" />
        </dd>
        <dd class="note">
          km {kmText(stage.fromKm)}–{kmText(stage.toKm)}, {clockOn(stage.departAt, day.utcOffsetMin)}–
          {clockOn(stage.arriveAt, day.utcOffsetMin)}, mean {grouped(stage.meanKmh)}
          {THIN}km/h
        </dd>
      </div>
      <div>
        <dt>Over the stage</dt>
        <dd>
          <Wh text={grouped(Math.abs(changeWh))} unit={`Wh ${changeWh < 0 ? 'less' : 'more'}`} />
        </dd>
        <dd class="note">
          from {whText(stage.opening.wh)} to {whText(stage.closing.wh)}
          {THIN}Wh; reserve {whText(day.reserve.wh)}
          {THIN}Wh
        </dd>
      </div>
    </dl>
  )
}

/** The charge that a crew counts, and the energy that is in it. */
const shares = ({ chargePct, energyPct }: DayBudget['opening']): string =>
  `${grouped(chargePct)}${THIN}% charge (${grouped(energyPct)}${THIN}% of the energy)`

/** A place by its name with its distance; one without a name is its distance. */
const placeText = ({ place, km }: DayBudget['lowest']): string =>
  place.startsWith('km ') ? place : `${place}, km ${kmText(km)}`
