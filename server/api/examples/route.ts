import type { RouteInput } from '../../documents/route.ts'

/** A short invented road over a southern high desert, with a few points only. */
export const routeExample: RouteInput = {
  name: 'Saltpan to Twin Wells',
  points: {
    latDeg: [-23.61, -23.56, -23.5, -23.45, -23.41, -23.35, -23.28, -23.22, -23.17, -23.11, -23.04, -22.98, -22.93],
    lonDeg: [16.4, 16.46, 16.5, 16.57, 16.64, 16.69, 16.72, 16.78, 16.85, 16.9, 16.93, 16.99, 17.05],
    elevationM: [1182, 1196, 1215, 1243, 1271, 1294, 1322, 1341, 1330, 1352, 1377, 1398, 1409],
  },
  limitKmh: 100,
  groundAlbedo: 0.28,
  roadHeatC: 2,
  stretches: [
    { fromKm: 0, toKm: 2.5, limitKmh: 50, haltsPerKm: 0.4 },
    { fromKm: 38, toKm: 46, surfaceFactor: 1.25 },
  ],
}
