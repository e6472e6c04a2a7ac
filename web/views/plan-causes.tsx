import { grouped, THIN } from '../format.ts'
import type { Planned } from '../plan-types.ts'

/** Where the spread of the closing balance comes from: what to measure next. */
export function PlanCauses({ plan: { ranges } }: { plan: Planned }) {
  if (ranges === null || ranges.causes.length === 0) return null
  const most = Math.max(...ranges.causes.map(({ sharePct }) => sharePct), 1)
  return (
    <section class="sec pad" aria-labelledby="causes-title">
      <div class="sech">
        <h2 id="causes-title">What to measure next</h2>
      </div>
      <p class="note lead">Where the range of the closing balance comes from.</p>
      <table class="off causes" id="causes">
        <caption class="sr">Causes of the range, largest first, with their share of the spread</caption>
        <thead class="sr">
          <tr>
            <th scope="col">Cause</th>
            <th scope="col">Share of the spread</th>
          </tr>
        </thead>
        <tbody>
          {ranges.causes.map(({ cause, label, sharePct }) => (
            <tr data-cause={cause}>
              <th scope="row">{label}</th>
              <td data-pct={sharePct}>
                <svg width="100%" height="12" aria-hidden="true">
                  <rect width={`${(100 * sharePct) / most}%`} height="12" fill="var(--ink)" />
                </svg>
              </td>
              <td>{sharePct < 0.5 ? `under 1${THIN}%` : `${grouped(sharePct)}${THIN}%`}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  )
}
