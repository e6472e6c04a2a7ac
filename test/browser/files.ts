/** A GPX track of our own: gentle hills over 300 km with the jitter of a hand-held receiver in its heights. */
export function gpxOf(points: number, spoil?: { at: number; latitude: string }): string {
  const lines = Array.from({ length: points }, (_, i) => {
    const t = i / (points - 1)
    const lat = spoil?.at === i ? spoil.latitude : (-23 + 0.15 * Math.sin(t * 9)).toFixed(7)
    const jitter = 1.5 * Math.sin(i * 12.9898) * Math.sin(i * 78.233)
    const height = 1100 + 380 * t + 60 * Math.sin(t * 40) + jitter
    return `<trkpt lat="${lat}" lon="${(16 + 2.75 * t).toFixed(7)}"><ele>${height.toFixed(1)}</ele></trkpt>`
  })
  return [
    '<?xml version="1.0" encoding="UTF-8"?>',
    '<gpx version="1.1" creator="made in a test" xmlns="http://www.topografix.com/GPX/1/1">',
    '<trk><name>Test road</name><trkseg>',
    ...lines,
    '</trkseg></trk>',
    '</gpx>',
  ].join('\n')
}

/** The line on which a point stands. */
export const lineOfPoint = (i: number): number => 4 + i

/** An hourly table of one day and a half in local time without an offset, as a weather page may hand it out. */
export function weatherOf(date: string): string {
  const rows = Array.from({ length: 36 }, (_, h) => {
    const day = new Date(Date.parse(`${date}T00:00:00Z`) + h * 3_600_000).toISOString()
    const air = 22 + 8 * Math.sin((((h % 24) - 9) / 12) * Math.PI)
    const cloud = h % 24 > 13 ? 45 : 10
    return `${day.slice(0, 10)} ${day.slice(11, 16)};${cloud};${air.toFixed(1).replace('.', ',')};25;3,5;110;885`
  })
  return [
    'time;cloud cover (%);air temperature (°C);relative humidity (%);wind speed (m/s);wind from (°);station pressure (hPa)',
    ...rows,
  ].join('\n')
}
