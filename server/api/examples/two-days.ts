import type { RaceInput } from '../../documents/race.ts'
import type { SkyInput } from '../../documents/sky.ts'
import { raceExample } from './race.ts'
import { skyExample } from './sky.ts'

const [saturday] = raceExample.days
const [place] = skyExample.places

const { targetPct: _wanted, ...saturdayOpen } = saturday

/** The short Saturday with a low pack and the same road once more on Sunday, which is to end nearly full; the night between is free. */
export const twoDayRace: RaceInput = {
  ...raceExample,
  name: 'Plateau Run, short weekend',
  openingPct: 30,
  days: [
    saturdayOpen,
    {
      ...saturday,
      date: '2026-10-18',
      targetPct: 80,
      stages: (saturday.stages ?? []).map((stage) => ({
        ...stage,
        id: `${stage.id}-again`,
        name: `${stage.name} again`,
      })),
    },
  ],
}

/** Hours of the night between, over which the evening's values hold. */
const NIGHT = ['2026-10-17T22:00:00+02:00', '2026-10-18T01:00:00+02:00', '2026-10-18T04:00:00+02:00']

const repeated = <T>(values: T[]): T[] => [...values, ...NIGHT.map(() => values[values.length - 1]), ...values]

/** The forecast for Saturday, taken for Sunday too. */
export const twoDaySky: SkyInput = {
  ...skyExample,
  places: [
    {
      ...place,
      at: [...place.at, ...NIGHT, ...place.at.map((at) => at.replace('-17T', '-18T'))],
      cloudPct: repeated(place.cloudPct ?? []),
      airTempC: repeated(place.airTempC ?? []),
      humidityPct: repeated(place.humidityPct ?? []),
      windMps: repeated(place.windMps ?? []),
      windFromDeg: repeated(place.windFromDeg ?? []),
      pressureHpa: repeated(place.pressureHpa ?? []),
    },
  ],
}
