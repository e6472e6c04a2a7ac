import type { DayBudget } from '../../server/documents/budget.ts'
import { clockOn, durationText, grouped, kmText, offsetText, THIN, whText } from '../format.ts'
import { Wh } from './figures.tsx'

type Stage = DayBudget['stages'][number]

/** The legs of the day: when they start and end, how far, and what they leave in the battery. */
export function Stages({ day }: { day: DayBudget }) {
  if (day.stages.length === 0) return null
  return (
    <section class="sec pad" aria-labelledby="stages-title">
      <div class="sech">
        <h2 id="stages-title">Stages</h2>
        <span class="note">
          {kmText(day.drivenKm)}
          {THIN}km, times in {offsetText(day.utcOffsetMin)}
        </span>
      </div>
      <ol class="stages">
        {day.stages.map((stage) => (
          <StageRow key={stage.id} stage={stage} offsetMin={day.utcOffsetMin} />
        ))}
      </ol>
      {day.penaltyMin > 0 && (
        <p class="note">
          Penalties of this day: <b>{grouped(day.penaltyMin)}</b>
          {THIN}min.
        </p>
      )}
    </section>
  )
}

function StageRow({ stage, offsetMin }: { stage: Stage; offsetMin: number }) {
  const stopMin =
    stage.departsNextAt === null ? 0 : (Date.parse(stage.departsNextAt) - Date.parse(stage.arriveAt)) / 60_000
  return (
    <li>
      <p class="what">
        <b>{stage.name}</b>
        {!stage.name.includes(stage.finish) && ` ${stage.start} to ${stage.finish}`}
      </p>
      <p class="when">
        <span class="n">{clockOn(stage.departAt, offsetMin)}</span>–
        <span class="n">{clockOn(stage.arriveAt, offsetMin)}</span>
      </p>
      <p class="note">
        {kmText(stage.drivenKm)}
        {THIN}km, mean {grouped(stage.meanKmh)}
        {THIN}km/h; {stage.isFinished ? 'in' : 'stopped by the clock'} with {whText(stage.arrival.wh)}
        {THIN}Wh, {grouped(stage.arrival.chargePct)}
        {THIN}% charge{stopMin > 0 && `; ${durationText(stopMin)} there`}
      </p>
      <p class="when">
        <span class="note">closes </span>
        <Wh text={whText(stage.closing.wh)} unit="Wh" wh={stage.closing.wh} />
      </p>
    </li>
  )
}
