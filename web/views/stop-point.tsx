import type { PointingHold, PointingWindow } from '../../server/documents/pointing.ts'
import { Compass, Side } from '../charts/pose.tsx'
import { clock } from '../format.ts'
import { compassText, costFrom, costText, degreesText, isDark, isFlat, squareText } from '../stop-words.ts'
import { Wh } from './figures.tsx'

/** Elevation of the sun in the plane in which the array is tilted; null where it is down or behind. [°] */
function sunFromSideDeg({ sunElevationDeg, sunAzimuthDeg, turnToDeg }: PointingHold): number | null {
  const RAD = Math.PI / 180
  const ahead = Math.cos(sunElevationDeg * RAD) * Math.cos((sunAzimuthDeg - turnToDeg) * RAD)
  if (sunElevationDeg <= 0) return null
  return Math.atan2(Math.sin(sunElevationDeg * RAD), ahead) / RAD
}

/** Compass and tilt of one hold, and what 10° off costs. */
export function Point({ window, index, hold }: { window: PointingWindow; index: number; hold: PointingHold }) {
  const { costW, costPackWh } = costFrom(window, index, ({ off }) => off[1])
  return (
    <section class="sec pad" aria-labelledby="point-title">
      <div class="sech">
        <h2 id="point-title">Point the array</h2>
        <span class="note">
          {window.reaimEveryMin > 0
            ? `holds to ${clock(hold.to)}`
            : `the pose of ${clock(hold.from)} to ${clock(hold.to)}`}
        </span>
      </div>
      <div class="point">
        <figure>
          <Compass
            turnToDeg={hold.turnToDeg}
            headingDeg={window.headingDeg}
            sunDeg={hold.sunElevationDeg > 0 ? hold.sunAzimuthDeg : null}
            isFlat={isFlat(hold)}
          />
          <figcaption>
            Turn to
            <b>
              {isFlat(hold) ? 'any' : compassText(hold.turnToDeg)}
              {!isFlat(hold) && <span class="u"> true</span>}
            </b>
          </figcaption>
        </figure>
        <figure>
          <Side tiltDeg={hold.tiltDeg} sunDeg={sunFromSideDeg(hold)} />
          <figcaption>
            Tilt from flat
            <b>{degreesText(hold.tiltDeg)}</b>
          </figcaption>
        </figure>
      </div>
      {!isDark(hold) && (
        <p class="gap" id="off-10">
          <b>10° off costs</b> at most <Wh text={costText(costW)} unit="W" wh={costW} />,{' '}
          <Wh text={costText(costPackWh)} unit="Wh" wh={costPackWh} /> by {clock(window.arrayDown)}.
        </p>
      )}
      <p class="note gap">{squareText(hold)}</p>
    </section>
  )
}
