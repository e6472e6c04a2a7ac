/**
 * The reference day of test/reference/chain.json as engine arguments: car, sky and steps, by the rules in that file.
 * Plain JavaScript, so that tests run it on the sources and the bench on what was built.
 */

const RAD = Math.PI / 180
const HOUR_MS = 3_600_000
const FULL_CIRCLE = 2 * Math.PI

/** UTC instant of a local clock time on the day of the chain. */
function instantMs(chain, localClock) {
  const [hours, minutes, seconds] = localClock.split(':').map(Number)
  return (
    Date.parse(`${chain.date_local}T00:00:00Z`) +
    (hours - chain.utc_offset_h) * HOUR_MS +
    (minutes * 60 + seconds) * 1000
  )
}

/** Value at x on straight lines through points. */
function between(xs, ys, x) {
  let k = 0
  while (k < xs.length - 2 && x >= xs[k + 1]) k++
  return ys[k] + ((x - xs[k]) / (xs[k + 1] - xs[k])) * (ys[k + 1] - ys[k])
}

/** Places and poses at every step; the car is level, and only its own speed moves the air. */
export function chainSteps(chain, stepS) {
  const fromMs = instantMs(chain, chain.start_local)
  const count = Math.round((instantMs(chain, chain.end_local) - fromMs) / 1000 / stepS) + 1
  const departMs = instantMs(chain, chain.depart_local)
  const distances = chain.waypoints.map((point) => point.dist_km)
  const lastKm = distances[distances.length - 1]
  const column = () => new Float64Array(count)
  const along = { count, atMs: column(), latRad: column(), lonRad: column(), altM: column() }
  const pose = { headingRad: column(), gradeRad: column(), airSpeedMps: column(), lifted: new Uint8Array(count) }
  const distKm = column()
  for (let i = 0; i < count; i++) {
    const atMs = fromMs + i * stepS * 1000
    const km = Math.min(lastKm, Math.max(0, ((atMs - departMs) / HOUR_MS) * chain.speed_kmh))
    const at = (name) =>
      between(
        distances,
        chain.waypoints.map((point) => point[name]),
        km,
      )
    const segment = Math.min(
      chain.segments.length - 1,
      Math.max(
        0,
        distances.findLastIndex((from) => from <= km),
      ),
    )
    along.atMs[i] = atMs
    along.latRad[i] = at('lat_deg') * RAD
    along.lonRad[i] = at('lon_deg') * RAD
    along.altM[i] = at('alt_m')
    pose.headingRad[i] = chain.segments[segment].heading_deg * RAD
    pose.airSpeedMps[i] = atMs >= departMs && km < lastKm ? chain.speed_kmh / 3.6 + chain.ambient_wind_mps : 0
    distKm[i] = km
  }
  return { along, pose, distKm }
}

/** Clear sky over one place, temperature by the clock and the same at every height: for `prepareSky`. */
export function chainSky(chain) {
  const { local_hour: hours, deg_c: degrees } = chain.air_temperature
  const atMs = Float64Array.from(hours, (hour) => instantMs(chain, `${hour}:00:00`))
  const [first] = chain.waypoints
  const place = {
    latRad: first.lat_deg * RAD,
    lonRad: first.lon_deg * RAD,
    altM: first.alt_m,
    fromMs: atMs,
    toMs: atMs,
    airC: Float64Array.from(degrees),
  }
  return { places: [place], linkeDefault: chain.linke_turbidity, lapseCPerM: 0 }
}

/** Three panels and seven strings: for `prepareArray`. The beam alone loses at the cover, or nothing does. */
export function chainArray(chain, incidence) {
  const { string } = chain
  const cellsInSeries = 38
  const cell = {
    lightA: string.I_L_ref,
    saturationA: string.I_o_ref,
    seriesOhm: string.R_s / cellsInSeries,
    shuntOhm: string.R_sh_ref / cellsInSeries,
    modifiedIdealityV: string.a_ref / cellsInSeries,
    currentCoefficientAPerC: string.alpha_sc,
    bandGapEv: string.EgRef,
    bandGapPerC: string.dEgdT,
  }
  const cooling = { kind: 'faiman', ...chain.faiman, mostMps: Infinity }
  return {
    panels: chain.panels.map((panel) => ({
      pitchRad: panel.pitch_deg * RAD,
      rollRad: panel.roll_deg * RAD,
      lifts: true,
      cooling,
      incidence,
      diffuseIncidence: 'none',
    })),
    stand: {
      tiltMinRad: 0,
      tiltMaxRad: 90 * RAD,
      azimuthFromRad: 0,
      azimuthToRad: FULL_CIRCLE,
      aim: 'at-sun',
      reaimS: 0,
    },
    strings: chain.panels.flatMap((panel, index) =>
      Array.from({ length: panel.strings }, (_, k) => ({
        name: `${panel.name} ${k + 1}`,
        cell,
        groups: [{ panel: index, cellsInSeries }],
        cellsInParallel: 1,
        soilingFraction: 0,
        bypassV: 0.5,
      })),
    ),
    albedo: chain.albedo,
    skyModel: 'hay-davies',
  }
}

/** Power of all strings together at each step. [W] */
export function totalW(harvest) {
  const sum = new Float64Array(harvest.bestW[0].length)
  for (const string of harvest.bestW) for (let i = 0; i < sum.length; i++) sum[i] += string[i]
  return sum
}

/** Energy by the trapezoid rule. [Wh] */
export function trapezoidWh(watts, stepS) {
  let sum = 0
  for (let i = 1; i < watts.length; i++) sum += 0.5 * (watts[i - 1] + watts[i])
  return (sum * stepS) / 3600
}
