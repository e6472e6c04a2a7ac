import { useSignal } from '@preact/signals'
import type { Refusal } from '../api.ts'
import { markReading } from '../crew.ts'
import type { KeptReading, TrackerReport } from '../crew-types.ts'
import { grouped, stampIn } from '../format.ts'
import { pct1 } from '../log-reading.ts'
import { days } from '../state.ts'
import { Conflict } from './conflict.tsx'

interface ReadingsProps {
  report: TrackerReport
  race: string
  onChange: () => void
}

/** Every reading of a tracker, newest first; one may be set aside and taken back, none is lost. */
export function Readings({ report, race, onChange }: ReadingsProps) {
  const refused = useSignal<Refusal | null>(null)
  const mark = async (entry: KeptReading): Promise<void> => {
    const answer = await markReading(race, entry.reading.id, entry.isSetAside ? 'take-back' : 'set-aside')
    refused.value = answer.refusal ?? null
    if (answer.value !== undefined) onChange()
  }
  if (report.readings.length === 0) return null
  return (
    <details class="more">
      <summary>Readings: {report.readings.length}</summary>
      {refused.value !== null && <Conflict refusal={refused.value} />}
      <ul class="docs">
        {report.readings.toReversed().map((entry) => (
          <li key={entry.reading.id}>
            <p>
              {stampIn(days.value[0]?.zone ?? 'UTC', Date.parse(entry.reading.at))} <b>{pct1(entry.efficiencyPct)} %</b>{' '}
              at {grouped(entry.reading.inputV * entry.reading.inputA)} W
              <br />
              <span class="note">{entry.isSetAside ? 'Set aside.' : entry.reason}</span>
            </p>
            <button type="button" class="quiet" onClick={() => void mark(entry)}>
              {entry.isSetAside ? 'Take back' : 'Set aside'}
            </button>
          </li>
        ))}
      </ul>
    </details>
  )
}
