import { useMemo } from 'preact/hooks'
import { grouped, round10, THIN, whText } from '../format.ts'
import type { RacePlanDocument } from '../race-types.ts'
import { isGiven, raceChartText } from '../race-words.ts'
import { closeMarks, dayStrips, type DayStrip, RACE, raceBattery, raceEnergyY } from './race-tracks.ts'
import { textWidth } from './text-width.ts'
import { useWidth } from './use-width.ts'

const TOP = 40
const FOOT = 8
const DAY_NAME = new Intl.DateTimeFormat('en-GB', { weekday: 'short', day: 'numeric', timeZone: 'UTC' })

/** The battery over the days of a race, with what each night closes at. */
export function RaceChart({ plan }: { plan: RacePlanDocument }) {
  const { frame, width } = useWidth()
  const room = Math.ceil(textWidth(`5${THIN}000`, '400 12px')) + 8
  const { strips, width: plotWidth } = useMemo(() => dayStrips(plan, width - room), [plan, width, room])
  const whole = plotWidth + room
  const height = TOP + RACE.battery + FOOT
  return (
    <section class="sec pad" aria-labelledby="race-chart-title">
      <div class="sech">
        <h2 id="race-chart-title">The battery over the days</h2>
      </div>
      <Key />
      <div class="racescroll" ref={frame} tabIndex={whole > width + 1 ? 0 : undefined}>
        <svg
          viewBox={`0 0 ${whole} ${height}`}
          width={whole}
          height={height}
          role="img"
          aria-label={raceChartText(plan)}
          class="plan"
        >
          <Days strips={strips} />
          <Battery plan={plan} strips={strips} plotWidth={plotWidth} whole={whole} />
          <Names strips={strips} />
        </svg>
      </div>
      <p class="note">
        At the speeds for people. Ruled is driving, grey is standing; nights are folded. The figure over each day is
        what it closes with.
      </p>
    </section>
  )
}

const Key = () => (
  <p class="key">
    <span>
      <svg width="22" height="12" aria-hidden="true">
        <path d="M0 6h22" stroke="var(--bal)" stroke-width="2.5" stroke-dasharray="7 3.5" />
      </svg>
      Battery planned, Wh
    </span>
    <span>
      <svg width="14" height="14" aria-hidden="true">
        <circle cx="7" cy="7" r="4.5" fill="var(--paper)" stroke="var(--ink)" stroke-width="2" />
      </svg>
      close found
    </span>
    <span>
      <svg width="14" height="14" aria-hidden="true">
        <rect x="2" y="2" width="10" height="10" fill="var(--ink)" />
      </svg>
      close given
    </span>
    <span>
      <svg width="10" height="14" aria-hidden="true">
        <path d="M1 1h8M5 1v12M1 13h8" stroke="var(--ink)" stroke-width="1.25" />
      </svg>
      likely range
    </span>
    <span>
      <svg width="22" height="12" aria-hidden="true">
        <path d="M0 4.4h22M0 7.6h22" stroke="var(--floor)" stroke-width="1.4" />
      </svg>
      reserve
    </span>
  </p>
)

/** Standing hours grey, drives on ruled paper, nights as folds. */
const Days = ({ strips }: { strips: DayStrip[] }) => (
  <g>
    <defs>
      <pattern id="rule-race" width="8" height="7" patternUnits="userSpaceOnUse">
        <path d="M0 3.5H8" stroke="var(--hair)" stroke-width="1" />
      </pattern>
    </defs>
    {strips.map(({ day, fromX, toX, x }) => (
      <>
        <rect x={fromX} y={TOP} width={toX - fromX} height={RACE.battery} fill="var(--sunk)" />
        {day.drives.map(({ fromMs, toMs }) => (
          <>
            <rect
              x={x(fromMs)}
              y={TOP}
              width={Math.max(x(toMs) - x(fromMs), 1)}
              height={RACE.battery}
              fill="var(--paper)"
            />
            <rect
              x={x(fromMs)}
              y={TOP}
              width={Math.max(x(toMs) - x(fromMs), 1)}
              height={RACE.battery}
              fill="url(#rule-race)"
            />
          </>
        ))}
        <path d={`M${fromX} ${TOP}v${RACE.battery}M${toX} ${TOP}v${RACE.battery}`} stroke="var(--ink-3)" />
      </>
    ))}
  </g>
)

function Battery(of: { plan: RacePlanDocument; strips: DayStrip[]; plotWidth: number; whole: number }) {
  const { plan, strips, plotWidth, whole } = of
  const { capacityWh, reserve } = plan
  const y = raceEnergyY(capacityWh, TOP)
  const d = raceBattery(strips, y)
  const floorY = y(reserve.wh)
  return (
    <g fill="none" stroke-linejoin="round">
      <path
        d={`M0 ${floorY - 1.6}H${plotWidth}M0 ${floorY + 1.6}H${plotWidth}`}
        stroke="var(--floor)"
        stroke-width="1.4"
      />
      <path d={d} stroke="var(--paper)" stroke-width="5.5" />
      <path d={d} stroke="var(--bal)" stroke-width="2.5" stroke-dasharray="7 3.5" data-side="battery" />
      <path d={`M0 ${TOP + RACE.battery}H${plotWidth}`} stroke="var(--ink)" stroke-width="1.25" />
      {closeMarks(strips, y).map(({ day, x, y: at, range }) => (
        <g data-close={day.close.kind} stroke="var(--ink)">
          {range !== null && (
            <path
              d={`M${x - 4} ${range.highY}h8M${x} ${range.highY}V${range.lowY}M${x - 4} ${range.lowY}h8`}
              stroke-width="1.25"
            />
          )}
          {isGiven(day) ? (
            <rect x={x - 5} y={at - 5} width="10" height="10" fill="var(--ink)" />
          ) : (
            <circle cx={x} cy={at} r="4.5" fill="var(--paper)" stroke-width="2" />
          )}
        </g>
      ))}
      <text x="2" y={floorY + 15} class="fl halo">
        {`Reserve ${grouped(round10(reserve.wh))}${THIN}Wh`}
      </text>
      {energyTicks(capacityWh).map((wh) => (
        <>
          <path d={`M${plotWidth} ${y(wh)}h4`} stroke="var(--ink-3)" />
          <text x={whole} y={y(wh) + (wh === 0 ? 0 : 4)} class="ax" text-anchor="end">
            {grouped(wh)}
          </text>
        </>
      ))}
    </g>
  )
}

/** A few round energies up to a full pack. */
function energyTicks(capacityWh: number): number[] {
  const every = [100, 200, 500, 1000, 2000, 5000, 10_000].find((step) => capacityWh / step <= 5.2) ?? 20_000
  return Array.from({ length: Math.floor(capacityWh / every) + 1 }, (_, i) => i * every)
}

const Names = ({ strips }: { strips: DayStrip[] }) => (
  <g>
    {strips.map(({ day, fromX, toX }) => (
      <>
        <text x={(fromX + toX) / 2} y="12" class="pl halo" text-anchor="middle">
          {DAY_NAME.format(new Date(`${day.date}T12:00:00Z`)).replace(',', '')}
        </text>
        <text x={(fromX + toX) / 2} y="31" class="gl halo" text-anchor="middle">
          {day.close.closing === null ? '–' : whText(day.close.closing.wh)}
          {day.close.closing !== null && <tspan class="gu">{`${THIN}Wh`}</tspan>}
        </text>
      </>
    ))}
  </g>
)
