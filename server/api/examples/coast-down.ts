import type { CoastDownInput } from '../../documents/coast-down.ts'

/** Speeds of four invented runs, a row each 5 s: 268 kg, 0.118 m², rolling 0.0041, some wind and slope, a sensor's scatter. */
const SPEEDS_KMH = [
  [
    81.9, 78.9, 75.9, 73.3, 70.7, 68.2, 65.9, 63.9, 61.2, 59.4, 57.4, 55.1, 53.6, 51.3, 49.7, 48.1, 46.6, 44.8, 43.5,
    41.6, 40.5, 38.9, 37.3, 36.5, 34.9, 33.5, 32.4, 31.3, 30.3, 28.3, 27.8, 26.7, 25.8, 24.2, 23.5, 22.2, 21.4, 20.4,
    19.3, 18.6, 17.4, 16.4, 15.5, 14.6,
  ],
  [
    84.3, 81.5, 79.1, 76.9, 74.5, 72.7, 70.8, 68.6, 67, 64.9, 63.2, 61.7, 59.8, 58.3, 56.9, 55.7, 54, 52.7, 51.4, 50.2,
    48.9, 47.8, 46.3, 45.2, 44.4, 43.2, 42, 41.5, 40.1, 39.4, 38.4, 37.2, 36.3, 35.3, 34.4, 33.7, 32.7, 31.7, 31.1,
    30.3, 29.6, 28.4, 28.1, 27.2, 26.3, 25.7, 25.1, 24.4, 23.4, 22.7, 22.2, 21.3, 20.7, 20.1, 19.2, 18.7, 17.9, 16.9,
    16.7, 15.8, 15.5, 14.8, 13.9,
  ],
  [
    81.3, 77.8, 74.9, 72.1, 69.9, 67.2, 65.1, 62.7, 60.9, 58.5, 56.8, 54.6, 52.8, 50.7, 49.3, 47.4, 46.2, 44.6, 42.7,
    41.5, 39.9, 38.5, 37.2, 35.7, 34.3, 33.1, 32.2, 30.7, 29.6, 28.8, 27, 26.1, 25.2, 24.3, 22.8, 22.3, 21, 19.8, 18.9,
    18.3, 17, 15.7, 15.3, 14.5,
  ],
  [
    83.1, 80.4, 78.6, 75.9, 74.1, 71.5, 69.7, 67.8, 65.9, 64.4, 62.5, 61, 59.1, 57.7, 56.6, 54.8, 53.4, 52.4, 51.2,
    49.6, 48.3, 47.1, 46, 44.9, 43.9, 42.6, 41.7, 40.7, 39.6, 38.5, 37.5, 36.8, 35.9, 35.2, 33.8, 33.1, 32.3, 31.7,
    30.3, 30, 29.1, 28.6, 27.5, 26.8, 26.2, 25.1, 24.3, 23.7, 22.9, 22.2, 21.8, 21.1, 20.3, 19.7, 19.1, 18.1, 17.6,
    16.7, 16.1, 15.7, 15.1, 14.8,
  ],
]

/** An invented test: two runs there and two back on the Saltpan strip, early in the morning. */
export const coastExample: CoastDownInput = {
  massKg: 268,
  rotatingFactor: 1.03,
  air: { temperatureC: 18, pressureHpa: 884, humidityPct: 35 },
  runs: SPEEDS_KMH.map((speedKmh, i) => ({
    name: `Saltpan strip ${i + 1}`,
    direction: i % 2 === 0 ? 'there' : 'back',
    timeS: speedKmh.map((_, row) => 5 * row),
    speedKmh,
  })),
}

/** The same runs as a table. */
export const COAST_TABLE = [
  'time (s),speed (km/h),run,direction',
  ...coastExample.runs.flatMap(({ timeS, speedKmh, direction }, i) =>
    timeS.map((time, row) => `${time},${speedKmh[row]},${i + 1},${direction}`),
  ),
].join('\n')
