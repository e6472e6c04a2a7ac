import { clock, grouped, THIN, whText } from '../format.ts'
import type { Planned } from '../plan-types.ts'
import { whRange } from '../plan-words.ts'

/** Battery at every stop and every 25 km, to be compared with the car. */
export function PlanGates({ plan: { ranges } }: { plan: Planned }) {
  if (ranges === null) return null
  return (
    <section class="sec pad print" aria-labelledby="gates-title">
      <div class="sech">
        <h2 id="gates-title">Gates</h2>
        <span class="note">battery on arrival</span>
      </div>
      <table class="off" id="gates">
        <thead>
          <tr>
            <th scope="col">Place</th>
            <th scope="col">At</th>
            <th scope="col">Wh</th>
            <th scope="col">Likely Wh</th>
          </tr>
        </thead>
        <tbody>
          {ranges.gates.map((gate) => (
            <tr>
              <th scope="row">
                {gate.name.startsWith('km ') ? gate.name : <b>{gate.name}</b>}
                {!gate.name.startsWith('km ') && <span class="q">{`, km${THIN}${grouped(gate.km)}`}</span>}
              </th>
              <td>{clock(gate.at)}</td>
              <td data-wh={gate.plannedWh}>{whText(gate.plannedWh)}</td>
              <td class="q" data-p10={gate.wh.p10} data-p90={gate.wh.p90}>
                {whRange(gate.wh)}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  )
}
