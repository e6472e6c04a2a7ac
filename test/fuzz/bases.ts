import { type Arbitrary, sample } from 'fast-check'
import { COAST_TABLE, coastExample } from '../../server/api/examples/coast-down.ts'
import type { CarInput } from '../../server/documents/car.ts'
import type { CoastDownInput } from '../../server/documents/coast-down.ts'
import type { RaceInput } from '../../server/documents/race.ts'
import type { RouteInput } from '../../server/documents/route.ts'
import type { SkyInput } from '../../server/documents/sky.ts'
import type { SpeedsInput } from '../../server/documents/speeds.ts'
import { anyCar, anyRace, anyRequest, anyRoute, anySky } from '../support/arbitrary.ts'
import { someCar, someRace, someRoute, someSky } from '../support/scenario.ts'

const BENCH = [60, 80, 100].flatMap((inputV) =>
  [40, 150, 400].map((inputW) => ({
    inputV,
    outputV: 120,
    inputW,
    efficiencyPct: 97.5 + inputW / 400 - 90 / inputW / 2,
  })),
)

const BODY = { kind: 'car-body' as const, lengthM: 3, laminarStart: true, heatCapacityKjM2C: 4 }

const HEAT = { fullToC: 65, leastFromC: 85, leastPct: 40, parkedCPerW: 2, movingCPerW: 1 }

const FAULTS: CarInput['strings'][number]['faults'] = [
  { kind: 'weak', panel: 'deck', underDiode: 2, cells: 2, lightPct: 35 },
  { kind: 'open', panel: 'deck', underDiode: 3, cells: 1 },
  { kind: 'shorted', panel: 'deck' },
]

const CANOPY = [
  { bearingDeg: 10, heightDeg: 20, lostPct: 15 },
  { bearingDeg: 350, heightDeg: 30, lostPct: 25 },
]

const HILLS = [
  { azimuthDeg: 80, heightDeg: 9 },
  { azimuthDeg: 200, heightDeg: 0 },
  { azimuthDeg: 300, heightDeg: 3.5 },
]

/** A car that says everything a car can say. */
const fullCar = (): CarInput => {
  const car = someCar()
  const [deck, nose] = car.panels
  const [one, two] = car.trackers
  return {
    ...car,
    body: { ...car.body, rotatingFactor: 1.04, rollingPerKmh: 0.00001, windHeightM: 0.6 },
    panels: [
      { ...deck, rollDeg: 3, glass: 'physical', cooling: BODY, shade: CANOPY },
      { ...nose, glass: 'ashrae', cooling: { kind: 'faiman', u0Wm2PerC: 25, u1WsM3PerC: 6.8, heatCapacityKjM2C: 11 } },
    ],
    stand: { tiltMinDeg: 5, tiltMaxDeg: 70, azimuthFromDeg: 0, azimuthToDeg: 300 },
    cellTypes: { silicon: { ...car.cellTypes.silicon, bandGapEv: 1.13, bandGapPerC: -0.0003 } },
    strings: car.strings.map((s, i) => ({
      ...s,
      inParallel: 1,
      cells: s.cells.map((group) => ({ ...group, bypassDiodes: 4 })),
      faults: i === 0 ? FAULTS : [],
      soilingPct: 3,
      bypassDropV: 0.4,
      alsoTrackers: i === 0 ? ['second deck tracker'] : [],
    })),
    trackers: [
      { ...one, trackingPct: 99, standbyW: 0.5, derating: HEAT },
      { name: two.name, window: { ...two.window, outputMinV: 60, outputMaxA: 12 }, bench: BENCH, benchUse: 'table' },
      { ...one, name: 'second deck tracker', window: { ...one.window, leastRiseV: 3 }, isDead: false },
    ],
  }
}

const fullRoute = (): RouteInput => ({
  ...someRoute(5, 20),
  elevation: { method: 'smoothing spline', climbBeforeM: 25, climbAfterM: 20 },
  limitKmh: 100,
  roughnessM: 0.05,
  groundAlbedo: 0.3,
  roadHeatC: 3,
  stretches: [
    { fromKm: 0, toKm: 1, limitKmh: 50, haltsPerKm: 0.5 },
    { fromKm: 3, toKm: 4, surfaceFactor: 1.2 },
  ],
})

const fullRace = (): RaceInput => {
  const race = someRace()
  const [day] = race.days
  const stage = { id: 'first', name: 'To Twin Wells', route: 'road', start: 'Saltpan', finish: 'Twin Wells' }
  const times = { opensAt: '08:05', closesAt: '11:00', clockStarts: 'at-opening' as const, raiseMin: 1, lowerMin: 1 }
  return {
    ...race,
    turbidityByMonth: [3, 3, 3.2, 3.5, 4, 4, 4.2, 4, 3.6, 3.4, 3.2, 3],
    penalties: {
      lateMinPerMin: 1,
      unfinishedMinPerKm: 2,
      mostLateMin: 30,
      lateFreeMin: 5,
      mostLatePenaltyMin: 60,
      earlyMinPerMin: 0.5,
    },
    days: [
      {
        ...day,
        zone: 'Africa/Windhoek',
        openingPct: 55,
        charging: (day.charging ?? []).map((window) => ({ ...window, horizon: HILLS })),
        raiseMin: 3,
        lowerMin: 3,
        stages: [
          {
            ...stage,
            toKm: 2,
            stop: { minutes: 10, lift: true, zone: 'Africa/Johannesburg', horizon: HILLS, ...times },
          },
          { ...stage, id: 'second', fromKm: 2 },
        ],
      },
    ],
  }
}

const fullSky = (): SkyInput => {
  const sky = someSky(30)
  const [place] = sky.places
  const like = (value: number) => place.at.map(() => value)
  const more = { humidityPct: like(30), gustMps: like(6), pressureHpa: like(1012), turbidity: like(3) }
  const light = { ghiWm2: like(400), dniWm2: like(500), dhiWm2: like(90), ghiP10Wm2: like(300), ghiP90Wm2: like(500) }
  return {
    ...sky,
    utcOffset: '+02:00',
    averaging: { ghiWm2: 'instant', airTempC: 'preceding' },
    pressureIs: 'sea-level',
    diffuse: 'hay-davies',
    turbidityByMonth: [3, 3, 3.2, 3.5, 4, 4, 4.2, 4, 3.6, 3.4, 3.2, 3],
    places: [
      { ...place, ...more },
      { ...place, name: 'Twin Wells', latDeg: -23.4, ...light },
    ],
  }
}

const SEED = 20261017
const several = <T>(arbitrary: Arbitrary<T>, numRuns: number): T[] => sample(arbitrary, { numRuns, seed: SEED })

/** Valid documents of each kind; the first three of each fit together. */
export const DOCUMENTS = {
  car: [someCar(), fullCar(), ...several(anyCar, 4)],
  route: [someRoute(4), fullRoute(), ...several(anyRoute, 3)],
  race: [someRace(), fullRace(), ...several(anyRace, 3)],
  sky: [someSky(20), fullSky(), ...several(anySky, 3)],
}

export const SPEEDS: SpeedsInput[] = [
  { kind: 'constant', speedKmh: 60 },
  { kind: 'legs', speedKmh: 60, legs: [{ stage: 'first', date: '2026-10-17', speedKmh: 70 }] },
  { kind: 'sections', speedKmh: 60, sections: [{ stage: 'first', fromKm: 0.5, toKm: 1.5, speedKmh: 50 }] },
  { kind: 'meet-target', lowestKmh: 55, highestKmh: 65 },
]

/** Whole documents that fit together. */
export const WHOLE = {
  car: someCar(),
  race: someRace(),
  routes: { road: someRoute(4) },
  sky: someSky(),
  speeds: SPEEDS[0],
}

export const REQUESTS: object[] = [
  { ...WHOLE, date: '2026-10-17' },
  ...SPEEDS.map((speeds) => ({
    car: fullCar(),
    race: fullRace(),
    routes: { road: fullRoute() },
    sky: fullSky(),
    speeds,
  })),
  { ...WHOLE, car: { id: 'fuzz-car' } },
  { car: { id: 'fuzz-car' }, race: { id: 'fuzz-race' }, sky: { id: 'fuzz-sky' }, speeds: SPEEDS[0] },
  ...several(anyRequest(), 6).map((request) => ({ ...Object(request) })),
]

const { speeds: _speeds, ...WHOLE_DAY } = WHOLE
const FROM = { at: '2026-10-17T10:00:00+02:00', stage: String(WHOLE.race.days[0].stages?.[0].id), km: 1, chargePct: 55 }

/** Days with what might be otherwise, from the morning and from the road. */
export const WHAT_IFS: object[] = [
  { ...WHOLE_DAY, date: '2026-10-17', targetPct: 20, variants: [{ name: 'Less sun', change: { sunPct: 90 } }] },
  {
    ...WHOLE_DAY,
    date: '2026-10-17',
    from: { ...FROM, speedKmh: 60, packC: 25 },
    variants: [
      { name: 'Wind', change: { headwindMps: 2, massKg: 5, dragAreaPct: 101, rollingPct: 99, openingPct: -2 } },
      { name: 'Rules', change: { stopMinutes: 5, reservePct: 12, targetPct: 15 } },
    ],
  },
]

const ON = '2026-10-17'

/** Days planned together: a night given, one freed, and one begun on the road. */
export const RACE_PLANS: object[] = [
  { ...WHOLE_DAY, members: 50, nights: [{ date: ON, kind: 'fixed', chargePct: 20 }] },
  { ...WHOLE_DAY, members: 50, fromDate: ON, toDate: ON, openingPct: 60, nights: [{ date: ON, kind: 'free' }] },
  { ...WHOLE_DAY, members: 50, from: { ...FROM, speedKmh: 60, packC: 25 }, spreads: { sunDayPct: 2 }, seed: 3 },
]

/** Variants by patch, by number and at speeds of their own. */
export const VARIANTS: object[] = [
  {
    ...WHOLE_DAY,
    date: '2026-10-17',
    members: 50,
    variants: [{ name: 'Light', car: { body: { massKg: 240 } }, change: { sunPct: 90 } }],
  },
  {
    ...WHOLE_DAY,
    date: '2026-10-17',
    members: 50,
    variants: [{ name: 'Held', race: { openingPct: 70 }, speeds: { kind: 'constant', speedKmh: 60 } }],
  },
]

/** Comparisons of two skies, with and without a day. */
export const COMPARISONS = [
  { forecast: someSky(20), measured: fullSky() },
  { forecast: { id: 'fuzz-sky' }, measured: someSky(40), zone: 'Africa/Windhoek' },
  {
    forecast: someSky(20),
    measured: { id: 'fuzz-sky' },
    day: { car: { id: 'fuzz-car' }, race: { id: 'fuzz-race' }, speeds: SPEEDS[0], date: '2026-10-17' },
  },
]

export const GPX = `<?xml version="1.0" encoding="UTF-8"?>
<gpx version="1.1" creator="Weaverbird" xmlns="http://www.topografix.com/GPX/1/1">
<wpt lat="-23.46" lon="17.0"><name>Gate</name></wpt>
<trk><name>Loop &amp; more</name><trkseg>
<trkpt lat="-23.50" lon="17.00"><ele>1180.5</ele></trkpt>
<trkpt lat="-23.49" lon="17.00"><ele>1185.5</ele></trkpt>
<trkpt lat="-23.48" lon="17.01"><ele>1190</ele></trkpt>
</trkseg><trkseg>
<trkpt lat="-23.47" lon="17.01"><ele>1192</ele></trkpt>
<trkpt lat="-23.46" lon="17.00"><ele>1188</ele></trkpt>
</trkseg></trk></gpx>
`

export const ROUTE_TABLES = [
  {
    delimiter: ',',
    text: 'latitude,longitude,elevation (m),speed limit (km/h)\n-23.50,17.00,1180,60\n-23.49,17.00,1184,60\n-23.48,17.01,1188,100\n-23.47,17.01,1190,100\n',
  },
  {
    delimiter: ';',
    text: 'lat;lon;elev (ft);speed limit (mph);surface;halts per km\n-23,50;17,00;3900;60;1;0\n-23,49;17,00;3910;60;1,1;0\n-23,48;17,01;3920;45;1,2;0,5\n',
  },
]

const PLACED = 'place=Saltpan&lat=-23.5&lon=17&elevationM=1200'
const SAID = 'name=Saltpan&source=forecast&issuedAt=2026-10-16T18:00:00%2B02:00&utcOffset=%2B02:00'

const HOURS = Array.from({ length: 13 }, (_, i) => String(i + 6).padStart(2, '0'))

const DAY_HOURS = Array.from({ length: 24 }, (_, i) => i + 1)
const EPW_HEADER = `LOCATION,Saltpan,-,XXX,invented,0,-23.5,17,2,1200
DESIGN CONDITIONS,0
TYPICAL/EXTREME PERIODS,0
GROUND TEMPERATURES,0
HOLIDAYS/DAYLIGHT SAVINGS,No,0,0,0
COMMENTS 1,invented
COMMENTS 2
DATA PERIODS,1,1,Data,Sunday,1/1,12/31`
const TMY3_HEADER = `1,"SALTPAN",XX,2.0,-23.5,17,1200
Date (MM/DD/YYYY),Time (HH:MM),GHI (W/m^2),DNI (W/m^2),DHI (W/m^2),TotCld (tenths),Dry-bulb (C),Dew-point (C),RHum (%),Pressure (mbar),Wdir (degrees),Wspd (m/s)`
const sunOf = (hour: number): number => (hour > 6 && hour < 19 ? 500 - 20 * Math.abs(12 - hour) : 0)

export const SKY_TABLES = [
  {
    delimiter: ',',
    query: `${SAID}&averaging=preceding&${PLACED}`,
    text: `time,GHI (W/m2),air temperature (°C),wind speed (m/s),wind from (°)\n${HOURS.map((h, i) => `2026-10-17 ${h}:00,${i * 70},${14 + i},2.5,${i * 20}`).join('\n')}\n`,
  },
  {
    delimiter: ';',
    query: SAID,
    text: `place;lat;lon;elevation (m);time;cloud [oktas; instant];temp (°C);humidity (%)\n${['Saltpan;-23,5;17;1200', 'Twin Wells;-23,4;17;1210'].flatMap((p) => HOURS.map((h, i) => `${p};2026-10-17 ${h}:00;${i % 8};${15 + i},5;40`)).join('\n')}\n`.replace(
      'cloud [oktas; instant]',
      '"cloud [oktas; instant]"',
    ),
  },
  {
    delimiter: ',',
    query: 'fileKind=epw&from=2026-10-17&to=2026-10-17',
    text: `${EPW_HEADER}\n${DAY_HOURS.map((h) => `1997,10,17,${h},60,A,${10 + h},5,40,88000,0,0,0,${sunOf(h)},9999,9999,0,0,0,0,${h * 15},3,2,2`).join('\n')}\n`,
  },
  {
    delimiter: ',',
    query: 'fileKind=tmy3&from=2026-10-17&to=2026-10-17',
    text: `${TMY3_HEADER}\n${DAY_HOURS.map((h) => `10/17/1997,${String(h).padStart(2, '0')}:00,${sunOf(h)},-9900,-9900,4,${10 + h},5,40,880,${h * 15},3`).join('\n')}\n`,
  },
]

/** A coast-down that says everything it can say, a stored car's. */
const fullCoastDown: CoastDownInput = {
  ...coastExample,
  car: { id: 'fuzz-car' },
  rollingPerKmh: 0.00001,
  rollingPerKmhSd: 0.00001,
  rollingPctPerC: 0.8,
  air: { ...coastExample.air, densityKgM3: 1.05 },
  runs: coastExample.runs.map((run) => {
    const like = (value: number) => run.timeS.map(() => (run.direction === 'there' ? value : -value))
    return { ...run, gradePct: like(0.06), headwindMps: like(1.2), crosswindMps: like(0.5) }
  }),
}

export const COAST_TESTS: CoastDownInput[] = [
  coastExample,
  fullCoastDown,
  { ...coastExample, gradePct: 0.06, windAlongMps: 1.2 },
]

const COAST_AIR = 'temperatureC=18&pressureHpa=884'

export const COAST_TABLES = [
  { delimiter: ',', query: `massKg=268&${COAST_AIR}`, text: COAST_TABLE },
  {
    delimiter: ';',
    query: `car=fuzz-car&${COAST_AIR}&directions=alternate`,
    text: COAST_TABLE.replace(',direction', ',grade (%),headwind (m/s)')
      .replaceAll(/,there$/gm, ',0.06,1.2')
      .replaceAll(/,back$/gm, ',-0.06,-1.2')
      .replaceAll(',', ';')
      .replaceAll('.', ','),
  },
]
