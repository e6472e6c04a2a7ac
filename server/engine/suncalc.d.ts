/** The one call used of suncalc 2: degrees; azimuth clockwise from north; altitude refracted for standard air. */
declare module 'suncalc' {
  export function getPosition(
    at: { valueOf(): number } | number,
    latDeg: number,
    lonDeg: number,
  ): { azimuth: number; altitude: number }
}
