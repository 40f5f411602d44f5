/** Where the demo estate lies. The ground is the same invention everywhere; only the place on the globe and its weather differ. */
export interface DemoPlace {
  timeZone: string;
  anchorLonLat: readonly [number, number];
  epsg: number;
  /** A season that crosses New Year is named after both. */
  seasonCrossesNewYear: boolean;
  /** Mean of daily maxima over the year, how far they swing, and how far minima lie below them, °C. */
  weather: { meanMaxC: number; swingC: number; downC: number };
}

const places = {
  north: { timeZone: 'Europe/Paris', anchorLonLat: [2.4012, 43.0978], epsg: 32631, seasonCrossesNewYear: false, weather: { meanMaxC: 20, swingC: 10, downC: 11 } },
  south: { timeZone: 'Africa/Johannesburg', anchorLonLat: [20.4012, -34.0478], epsg: 32734, seasonCrossesNewYear: true, weather: { meanMaxC: 23, swingC: 6, downC: 11 } },
  tropics: { timeZone: 'Africa/Addis_Ababa', anchorLonLat: [38.4012, 8.0978], epsg: 32637, seasonCrossesNewYear: false, weather: { meanMaxC: 27, swingC: 2, downC: 13 } },
} as const satisfies Record<string, DemoPlace>;

/** First and last month and day on which grapes plausibly stand three weeks after veraison, a little generous. */
const windows = [
  { place: places.north, from: '08-01', to: '10-25' },
  { place: places.south, from: '01-20', to: '04-25' },
] as const;

/**
 * The demo always stands shortly before picking, so that there is something to do on any day of the year. A grower would
 * laugh at ripe fruit in December in the north: the estate therefore lies where fruit ripens on this day. When it does
 * so in neither half of the world, that is a tropical highland, where pruning decides when vines ripen.
 */
export function placeOn(today: string): DemoPlace {
  const monthDay = today.slice(5);
  return windows.find(({ from, to }) => monthDay >= from && monthDay <= to)?.place ?? places.tropics;
}
