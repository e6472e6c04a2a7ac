const RAD = Math.PI / 180
const MIDDLE = 84
const RADIUS = 68

/** Where an azimuth points on the dial, clockwise from north. */
const at = (deg: number, radius: number): string => {
  const x = MIDDLE + radius * Math.sin(deg * RAD)
  const y = MIDDLE - radius * Math.cos(deg * RAD)
  return `${x.toFixed(1)} ${y.toFixed(1)}`
}

const TICKS = Array.from(
  { length: 36 },
  (_, i) => `M${at(10 * i, RADIUS)}L${at(10 * i, i % 9 === 0 ? 59 : 63.5)}`,
).join('')

const QUARTERS = ['N', 'E', 'S', 'W'].map((name, i) => ({ name, deg: 90 * i }))
/** A letter nearer than 20° to where the array faces would stand in the arrow. */
const CLEAR_COS = Math.cos(20 * RAD)

interface CompassProps {
  turnToDeg: number
  /** Where the car's nose points. [°] */
  headingDeg: number
  /** Null where the sun is down. [°] */
  sunDeg: number | null
  /** Whether the array lies flat, so that it faces nowhere. */
  isFlat: boolean
}

/** The car and its array from above, north up. */
export function Compass({ turnToDeg, headingDeg, sunDeg, isFlat }: CompassProps) {
  const faces = isFlat ? 'array lies flat' : `array faces ${Math.round(turnToDeg) % 360} degrees`
  const label = `Seen from above: ${faces}; car nose points ${Math.round(headingDeg) % 360} degrees`
  return (
    <svg viewBox="0 0 168 168" width="100%" role="img" aria-label={label}>
      <circle cx={MIDDLE} cy={MIDDLE} r={RADIUS} fill="none" stroke="var(--ink)" stroke-width="1.5" />
      <path d={TICKS} stroke="var(--ink)" stroke-width="1.25" />
      <g transform={`rotate(${headingDeg} ${MIDDLE} ${MIDDLE})`}>
        <path
          d="M73 114V64Q73 50 84 48Q95 50 95 64V114Q84 119 73 114Z"
          fill="var(--sunk)"
          stroke="var(--ink-2)"
          stroke-width="1.5"
        />
      </g>
      {!isFlat && (
        <g transform={`rotate(${turnToDeg} ${MIDDLE} ${MIDDLE})`}>
          <path d="M54 66H114" stroke="var(--ink)" stroke-width="7" />
          <path d="M84 62V28M78 36L84 26L90 36" fill="none" stroke="var(--ink)" stroke-width="2.5" />
        </g>
      )}
      {sunDeg !== null && (
        <Sun cx={MIDDLE + RADIUS * Math.sin(sunDeg * RAD)} cy={MIDDLE - RADIUS * Math.cos(sunDeg * RAD)} />
      )}
      <g font-size="14.5" font-weight="700" text-anchor="middle" class="halo">
        {QUARTERS.filter(({ deg }) => isFlat || Math.cos((turnToDeg - deg) * RAD) < CLEAR_COS).map(({ name, deg }) => (
          <text x={MIDDLE + 49 * Math.sin(deg * RAD)} y={MIDDLE - 49 * Math.cos(deg * RAD) + 5}>
            {name}
          </text>
        ))}
      </g>
    </svg>
  )
}

const Sun = ({ cx, cy }: { cx: number; cy: number }) => (
  <circle cx={cx} cy={cy} r="9" fill="var(--in)" stroke="var(--ink)" stroke-width="2" />
)

interface SideProps {
  tiltDeg: number
  /** Elevation of the sun as seen from the side, in the plane of the tilt; null where it is down or behind. [°] */
  sunDeg: number | null
}

const FOOT = { x: 52, y: 132 }
const LENGTH = 92

/** The tilted array from the side, facing left. */
export function Side({ tiltDeg, sunDeg }: SideProps) {
  const [cos, sin] = [Math.cos(tiltDeg * RAD), Math.sin(tiltDeg * RAD)]
  const top = { x: FOOT.x + LENGTH * cos, y: FOOT.y - LENGTH * sin }
  const middle = { x: (FOOT.x + top.x) / 2, y: (FOOT.y + top.y) / 2 }
  const out = (reach: number): string => `${(middle.x - reach * sin).toFixed(1)} ${(middle.y - reach * cos).toFixed(1)}`
  const arc = `M${FOOT.x + 36} ${FOOT.y}A36 36 0 0 0 ${(FOOT.x + 36 * cos).toFixed(1)} ${(FOOT.y - 36 * sin).toFixed(1)}`
  const toSun = sunDeg === null ? 0 : 78
  const [sunX, sunY] = [
    middle.x - toSun * Math.cos((sunDeg ?? 0) * RAD),
    middle.y - toSun * Math.sin((sunDeg ?? 0) * RAD),
  ]
  return (
    <svg
      viewBox="-28 -26 196 196"
      width="100%"
      role="img"
      aria-label={`Seen from the side: array tilted ${Math.round(tiltDeg)} degrees from flat`}
    >
      <path d={`M-26 ${FOOT.y}H164`} stroke="var(--ink)" stroke-width="1.5" />
      {tiltDeg >= 1 && <path d={arc} fill="none" stroke="var(--ink)" stroke-width="1.75" />}
      <path
        d={`M${top.x.toFixed(1)} ${top.y.toFixed(1)}V${FOOT.y}`}
        stroke="var(--ink-2)"
        stroke-width="2"
        stroke-dasharray="2 3"
      />
      <path d={`M${out(4)}L${out(52)}`} stroke="var(--ink)" stroke-width="2.5" />
      <path d={`M${FOOT.x} ${FOOT.y}L${top.x.toFixed(1)} ${top.y.toFixed(1)}`} stroke="var(--ink)" stroke-width="7" />
      {sunDeg !== null && <Sun cx={sunX} cy={sunY} />}
      <text x={FOOT.x + 44} y={tiltDeg < 22 ? FOOT.y + 18 : FOOT.y - 8} font-size="15" font-weight="700" class="halo">
        {Math.round(tiltDeg)}°
      </text>
    </svg>
  )
}
