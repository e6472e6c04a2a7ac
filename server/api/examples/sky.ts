import type { SkyInput } from '../../documents/sky.ts'

const HOURS = ['06', '07', '08', '09', '10', '11', '12', '13', '14', '15', '16', '17', '18', '19']

/** An invented forecast for one place: thin cloud in the morning, wind in the afternoon. */
export const skyExample: SkyInput = {
  name: 'Saltpan, Friday evening forecast',
  source: 'forecast',
  issuedAt: '2026-10-16T18:00:00+02:00',
  utcOffset: '+02:00',
  pressureIs: 'station',
  places: [
    {
      name: 'Saltpan',
      latDeg: -23.61,
      lonDeg: 16.4,
      elevationM: 1180,
      at: HOURS.map((hour) => `2026-10-17T${hour}:00:00+02:00`),
      cloudPct: [30, 35, 40, 35, 25, 15, 10, 10, 10, 15, 20, 20, 15, 10],
      airTempC: [14, 15, 18, 21, 24, 27, 29, 31, 32, 32, 31, 30, 27, 24],
      humidityPct: [48, 45, 38, 32, 26, 22, 19, 17, 16, 16, 17, 19, 24, 28],
      windMps: [2, 2, 2.5, 3, 3, 3.5, 4, 4.5, 5, 5.5, 5.5, 5, 4, 3],
      windFromDeg: [90, 90, 85, 80, 70, 60, 45, 30, 20, 10, 10, 15, 20, 30],
      pressureHpa: [884, 884, 885, 885, 885, 884, 883, 882, 881, 881, 881, 881, 882, 882],
    },
  ],
}

/** What was measured there on the day: less sun than forecast in the morning, a little warmer, more wind. */
export const measuredExample: SkyInput = {
  name: 'Saltpan, measured at the gate',
  source: 'measured',
  issuedAt: '2026-10-17T15:05:00+02:00',
  utcOffset: '+02:00',
  places: [
    {
      name: 'Gate',
      latDeg: -23.6,
      lonDeg: 16.42,
      elevationM: 1185,
      at: HOURS.slice(1, 10).map((hour) => `2026-10-17T${hour}:00:00+02:00`),
      ghiWm2: [95, 280, 505, 730, 890, 985, 1010, 960, 835],
      airTempC: [15.5, 18.5, 22, 25, 28, 30, 31.5, 32.5, 33],
      windMps: [2.5, 3, 3.5, 3.5, 4, 5, 5, 5.5, 6],
      windFromDeg: [95, 90, 80, 75, 60, 50, 35, 20, 15],
      pressureHpa: [883, 884, 884, 884, 883, 882, 881, 880, 880],
    },
  ],
}
