import type { DayBudget } from '../../server/documents/budget.ts'
import { durationText, grouped, round10, THIN } from '../format.ts'

/** How warm the pack was on the day, and what held it back for a minute or more. */
export function PackNote({ pack }: { pack: DayBudget['pack'] }) {
  const limits = pack.limits.filter(({ minutes }) => minutes >= 1)
  return (
    <section class="sec pad" aria-labelledby="pack-title">
      <div class="sech">
        <h2 id="pack-title">Battery</h2>
      </div>
      <p class="note">
        Cells at {degrees(pack.openingC)} when the day opens, {degrees(pack.coldestC)} at the coldest,{' '}
        {degrees(pack.warmestC)} at the warmest.
      </p>
      {limits.length > 0 && (
        <ul class="plain">
          {limits.map(({ limit, label, minutes, wh }) => (
            <li key={limit}>
              {label}: {durationText(Math.round(minutes))}
              {round10(wh) > 0 && `, ${grouped(round10(wh))}${THIN}Wh not moved`}.
            </li>
          ))}
        </ul>
      )}
    </section>
  )
}

const degrees = (tempC: number): string => `${grouped(tempC)}${THIN}°C`
