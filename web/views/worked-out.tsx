import { Disc } from '../charts/disc.tsx'
import { ageAmount, clockAt, offsetText, THIN, zoneOffsetMin } from '../format.ts'
import type { DayAnswer } from '../phone/ask-day.ts'
import { nowMs } from '../shown.ts'

/** Who worked an answer out and when; for the phone's, how old its documents are. */
export function WorkedOut({ of, zone }: { of: Omit<DayAnswer<unknown>, 'value'>; zone: string }) {
  const offsetMin = zoneOffsetMin(zone, of.atMs)
  const at = `${clockAt(Math.floor(of.atMs / 60_000) * 60_000, offsetMin)}${THIN}${offsetText(offsetMin)}`
  if (of.keptAtMs === null)
    return <p class="note source" data-source="service">{`Worked out by the service, ${at}.`}</p>
  const { text, unit } = ageAmount(nowMs.value - of.keptAtMs)
  return (
    <p class="note source" data-source="phone">
      <Disc age={nowMs.value - of.keptAtMs < 3_600_000 ? 'fresh' : 'ageing'} />
      <span>
        <b>Worked out on this phone, {at}</b>, from car, sky and race as the service had them {text}
        {THIN + unit} ago.
      </span>
    </p>
  )
}
