import type { PointingHold, PointingWindow } from '../../server/documents/pointing.ts'
import { clock, grouped } from '../format.ts'
import { compassText, costFrom, costText, degreesText, isDark, isFlat } from '../stop-words.ts'
import { Wh } from './figures.tsx'

interface OffProps {
  window: PointingWindow
  index: number
}

/** What being off costs from a hold on, by angle, and left flat. */
export function OffCosts({ window, index }: OffProps) {
  const rows = [
    ...window.holds[index].off.map(({ offDeg }, k) => ({
      name: `${offDeg}°`,
      costs: costFrom(window, index, ({ off }) => off[k]),
    })),
    { name: 'Left flat', costs: costFrom(window, index, ({ flat }) => flat) },
  ]
  return (
    <section class="sec pad" aria-labelledby="off-title">
      <div class="sech">
        <h2 id="off-title">What being off costs</h2>
        <span class="note">by {clock(window.arrayDown)}</span>
      </div>
      <table class="off">
        <thead>
          <tr>
            <th scope="col">Off by</th>
            <th scope="col">Now</th>
            <th scope="col">At the strings</th>
            <th scope="col">In the pack</th>
          </tr>
        </thead>
        <tbody>
          {rows.map(({ name, costs }) => (
            <tr>
              <th scope="row">{name}</th>
              <td>
                <Wh text={costText(costs.costW)} unit="W" wh={costs.costW} />
              </td>
              <td>
                <Wh text={costText(costs.costHarvestWh)} unit="Wh" wh={costs.costHarvestWh} />
              </td>
              <td>
                <Wh text={costText(costs.costPackWh)} unit="Wh" wh={costs.costPackWh} />
              </td>
            </tr>
          ))}
        </tbody>
      </table>
      <p class="note gap">
        Off by up to so much, in the direction that costs most, until the array comes down. A full battery takes no more
        from a better pose.
      </p>
    </section>
  )
}

interface HoldsProps extends OffProps {
  onHold: (index: number) => void
}

/** Every pose of a window; a row is chosen by its time. */
export function Holds({ window, index, onHold }: HoldsProps) {
  return (
    <section class="sec pad" aria-labelledby="holds-title">
      <div class="sech">
        <h2 id="holds-title">
          {window.reaimEveryMin > 0 ? `Every ${grouped(window.reaimEveryMin)} minutes` : 'By ten minutes'}
        </h2>
        <span class="note">tap a time</span>
      </div>
      <table class="off holds">
        <thead>
          <tr>
            <th scope="col">From</th>
            <th scope="col">Turn to</th>
            <th scope="col">Tilt</th>
            <th scope="col">Best</th>
            <th scope="col">Flat</th>
          </tr>
        </thead>
        <tbody>
          {window.holds.map((hold, i) => (
            <tr aria-current={i === index ? 'true' : undefined}>
              <th scope="row">
                <button type="button" aria-pressed={i === index} onClick={() => onHold(i)}>
                  {clock(hold.from)}
                </button>
              </th>
              <Row hold={hold} />
            </tr>
          ))}
        </tbody>
      </table>
    </section>
  )
}

function Row({ hold }: { hold: PointingHold }) {
  const { best, flat } = hold
  return (
    <>
      <td>{isDark(hold) ? '–' : isFlat(hold) ? 'any' : compassText(hold.turnToDeg)}</td>
      <td>{isDark(hold) ? '–' : degreesText(hold.tiltDeg)}</td>
      <td>
        <Wh text={grouped(best.stringsW)} unit="W" />
      </td>
      <td>
        <Wh text={grouped(flat.stringsW)} unit="W" />
      </td>
    </>
  )
}
