import type { PartOfDay, TrackerDayWork, TrackerWork } from '../crew-types.ts'
import { grouped, THIN, whText } from '../format.ts'
import { pct1 } from '../log-reading.ts'
import { edgeTexts, minutesText, outsideMinutes, outsideWh, smallWh, worthText } from '../tracker-part.ts'
import { Wh } from './figures.tsx'

interface WorthProps {
  work: TrackerWork
  part: PartOfDay
  all: TrackerDayWork
  /** Place of the part among the tracker's parts. */
  at: number
}

/** What a tracker took over a part of the day, what its window cost, what a better or a dead one is worth. */
export function Worth({ work, part, all, at }: WorthProps) {
  const allWh = all.trackers.reduce((sum, { parts }) => sum + (parts[at]?.inputWh ?? 0), 0)
  const edges = edgeTexts(part)
  const outside = outsideMinutes(part)
  return (
    <div class="worth">
      <dl class="facts three">
        <div>
          <dt>Taken</dt>
          <dd>
            <Wh text={whText(part.inputWh)} unit="Wh" />
          </dd>
          <dd class="note">{allWh > 0 ? `${grouped((100 * part.inputWh) / allWh)}${THIN}% of all trackers` : ''}</dd>
        </div>
        <div>
          <dt>Outside window</dt>
          <dd>
            <Wh text={minutesText(outside)} unit="min" />
          </dd>
          <dd class="note">{outside < 0.05 ? 'all inside' : `cost ${smallWh(outsideWh(part))}${THIN}Wh`}</dd>
        </div>
        <div>
          <dt>One point better</dt>
          <dd>
            <Wh text={`+${smallWh(part.onePointWh)}`} unit="Wh" />
          </dd>
          <dd class="note">{part.onePointMin === null ? '' : `or ${worthText(part.onePointMin)}`}</dd>
        </div>
        {part.kind === 'day' && <IfDead work={work} />}
      </dl>
      {edges.map((text) => (
        <p class="note">{text}.</p>
      ))}
      <p class="note">{efficiencyText(work, part)}</p>
    </div>
  )
}

const IfDead = ({ work: { ifDead } }: { work: TrackerWork }) =>
  ifDead === null ? null : (
    <div>
      <dt>If it were dead</dt>
      <dd>
        <Wh text={`\u2212${whText(ifDead.wh)}`} unit="Wh" />
      </dd>
      <dd class="note">{ifDead.min === null ? '' : `or ${worthText(ifDead.min)}`}</dd>
    </div>
  )

function efficiencyText({ ratedW }: TrackerWork, part: PartOfDay): string {
  const { meanEfficiencyPct: mean, europeanPct, californianPct, takenPct } = part
  if (mean === null || europeanPct === null || californianPct === null || takenPct === null) return 'It took nothing.'
  return `Efficiency ${pct1(mean)}${THIN}% by this part’s own powers; European ${pct1(europeanPct)}${THIN}%, Californian ${pct1(californianPct)}${THIN}% of ${grouped(ratedW)}${THIN}W. It took ${pct1(takenPct)}${THIN}% of its string’s best.`
}
