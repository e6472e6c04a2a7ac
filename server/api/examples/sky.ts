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
