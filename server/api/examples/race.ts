import type { RaceInput } from '../../documents/race.ts'

/** One day of the Plateau Run: two stages on one road with a stop between them. */
export const raceExample: RaceInput = {
  name: 'Plateau Run, short Saturday',
  zone: 'Africa/Windhoek',
  openingPct: 62,
  openingPackC: 18,
  days: [
    {
      date: '2026-10-17',
      release: '06:00',
      driving: { from: '08:00', to: '17:00' },
      charging: [
        {
          from: '06:15',
          to: '07:50',
          horizon: [
            { azimuthDeg: 60, heightDeg: 0 },
            { azimuthDeg: 85, heightDeg: 6 },
            { azimuthDeg: 110, heightDeg: 4 },
            { azimuthDeg: 130, heightDeg: 0 },
          ],
        },
        { from: '17:00', to: '18:40' },
      ],
      impound: '19:00',
      targetPct: 70,
      stages: [
        {
          id: 'saltpan-old-pump',
          name: 'Saltpan to Old Pump',
          route: 'saltpan-twin-wells',
          toKm: 52,
          start: 'Saltpan',
          finish: 'Old Pump',
          stop: {
            minutes: 30,
            horizon: [
              { azimuthDeg: 250, heightDeg: 2 },
              { azimuthDeg: 280, heightDeg: 14 },
              { azimuthDeg: 310, heightDeg: 2 },
            ],
          },
        },
        {
          id: 'old-pump-twin-wells',
          name: 'Old Pump to Twin Wells',
          route: 'saltpan-twin-wells',
          fromKm: 52,
          start: 'Old Pump',
          finish: 'Twin Wells',
        },
      ],
    },
  ],
}
