import type { LonLat } from './coordinates.ts';

/** Decimal degrees as navigation devices and map programs take them: latitude, longitude, in WGS 84; six decimals are a tenth of a metre. */
export const latLonText = ([lon, lat]: LonLat): string => `${lat.toFixed(6)}, ${lon.toFixed(6)}`;
