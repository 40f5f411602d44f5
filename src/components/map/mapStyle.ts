import type { ExpressionSpecification, LayerSpecification, StyleSpecification } from 'maplibre-gl';
import labelFontUrl from '@fontsource/open-sans/files/open-sans-latin-600-normal.woff2?url';

/** The plain style: every source of ours, empty, and every layer in its order. Nothing is asked from outside. */

export interface MapInk {
  readonly land: string;
  readonly ground: string;
  readonly ink: string;
  readonly contour: string;
  readonly contourIndex: string;
  readonly water: string;
  readonly track: string;
  readonly trackEdge: string;
  readonly zoneLine: string;
  readonly brick: string;
  readonly sky: string;
  readonly amber: string;
  readonly muted: string;
}

export const mapSources = ['contours', 'lines', 'leader', 'blocks', 'zones', 'doubt', 'rows', 'rowEnds', 'ghosts', 'ghostFlags', 'points', 'pills', 'names'] as const;
export type MapSource = (typeof mapSources)[number];

/** Images of the relief go under this layer, layer cells under the next. */
export const aboveRelief = 'contour-lines';
export const aboveCells = 'zone-fill';

const chosen: ExpressionSpecification = ['boolean', ['feature-state', 'chosen'], false];
const kind = (name: string): ExpressionSpecification => ['==', ['get', 'kind'], name];
const label = ['Label'];

/** Strokes that tell routes apart without colour, in widths of the line: dash, gap and so on; empty is unbroken. */
export const routeStrokes: readonly (readonly number[])[] = [[], [4, 2], [1, 1.5], [5, 1.5, 1, 1.5]];

export function mapLayers(ink: MapInk): LayerSpecification[] {
  return [
    { id: 'land', type: 'background', paint: { 'background-color': ink.land } },
    { id: 'contour-lines', type: 'line', source: 'contours', paint: { 'line-color': ['case', ['get', 'index'], ink.contourIndex, ink.contour], 'line-width': ['case', ['get', 'index'], 1.3, 0.8] } },
    { id: 'contour-figures', type: 'symbol', source: 'contours', minzoom: 14, filter: ['get', 'index'], layout: { 'symbol-placement': 'line', 'symbol-spacing': 420, 'text-field': ['get', 'text'], 'text-font': label, 'text-size': 11 }, paint: { 'text-color': ink.muted, 'text-halo-color': ink.land, 'text-halo-width': 2.5 } },
    { id: 'water-edge', type: 'line', source: 'lines', filter: kind('water'), layout: { 'line-cap': 'round' }, paint: { 'line-color': ink.water, 'line-width': 8, 'line-opacity': 0.28 } },
    { id: 'water', type: 'line', source: 'lines', filter: kind('water'), layout: { 'line-cap': 'round' }, paint: { 'line-color': ink.water, 'line-width': 3 } },
    { id: 'track-edge', type: 'line', source: 'lines', filter: kind('track'), layout: { 'line-cap': 'round' }, paint: { 'line-color': ink.trackEdge, 'line-width': 5 } },
    { id: 'track', type: 'line', source: 'lines', filter: kind('track'), layout: { 'line-cap': 'round' }, paint: { 'line-color': ink.track, 'line-width': 3 } },
    { id: 'leader-ground', type: 'line', source: 'leader', paint: { 'line-color': ink.ground, 'line-width': 5 } },
    { id: 'leader', type: 'line', source: 'leader', paint: { 'line-color': ink.ink, 'line-width': 1.5 } },
    { id: 'block-halo', type: 'line', source: 'blocks', layout: { 'line-join': 'round' }, paint: { 'line-color': ink.ground, 'line-width': 7 } },
    { id: 'block-fill', type: 'fill', source: 'blocks', paint: { 'fill-color': ink.ground, 'fill-opacity': 0.55 } },
    { id: 'zone-fill', type: 'fill', source: 'zones', paint: { 'fill-pattern': ['get', 'pattern'], 'fill-antialias': false } },
    { id: 'doubt-fill', type: 'fill', source: 'doubt', paint: { 'fill-pattern': 'doubt', 'fill-antialias': false, 'fill-opacity': 0.75 } },
    // A light line in a dark groove holds on the darkest and the lightest zone alike.
    ...rowLines('rows-third', { minzoom: 16, maxzoom: 18, filter: ['get', 'third'] }),
    ...rowLines('rows-all', { minzoom: 18 }),
    { id: 'zone-edge', type: 'line', source: 'zones', layout: { 'line-join': 'miter' }, paint: { 'line-color': ink.zoneLine, 'line-width': ['interpolate', ['linear'], ['zoom'], 14, 1.2, 17, 2] } },
    { id: 'zone-chosen', type: 'line', source: 'zones', layout: { 'line-join': 'miter' }, paint: { 'line-color': ink.zoneLine, 'line-width': ['case', chosen, 3.5, 0] } },
    { id: 'restriction-fill', type: 'fill', source: 'blocks', filter: ['get', 'restricted'], paint: { 'fill-pattern': 'restriction', 'fill-antialias': false } },
    { id: 'block-line', type: 'line', source: 'blocks', layout: { 'line-join': 'miter' }, paint: { 'line-color': ['case', ['get', 'restricted'], ink.brick, ink.zoneLine], 'line-width': ['case', ['any', chosen, ['get', 'restricted']], 3.5, 2] } },
    { id: 'ghost-line-other', type: 'line', source: 'ghosts', filter: ['all', ['!', ['get', 'chosen']], ['!', ['has', 'dots']]], paint: { 'line-color': ink.amber, 'line-width': 1.5, 'line-dasharray': [1.33, 2.67] } },
    { id: 'ghost-line', type: 'line', source: 'ghosts', filter: ['all', ['get', 'chosen'], ['!', ['has', 'dots']]], paint: { 'line-color': ink.sky, 'line-width': 2, 'line-dasharray': [4, 2] } },
    { id: 'ghost-dots', type: 'circle', source: 'ghosts', filter: ['has', 'dots'], paint: { 'circle-radius': ['case', ['get', 'chosen'], 2.5, 1.5], 'circle-color': ['case', ['get', 'chosen'], ink.sky, ink.amber], 'circle-opacity': ['case', ['get', 'chosen'], 1, 0.7], 'circle-stroke-color': ink.ground, 'circle-stroke-width': ['case', ['get', 'chosen'], 1, 0] }, layout: { 'circle-sort-key': ['case', ['get', 'chosen'], 1, 0] } },
    { id: 'route-edge', type: 'line', source: 'lines', filter: kind('route'), layout: { 'line-cap': 'round', 'line-join': 'round' }, paint: { 'line-color': ink.ground, 'line-width': 6 } },
    ...routeStrokes.map((dashes, stroke): LayerSpecification => ({ id: `route-${stroke}`, type: 'line', source: 'lines', filter: ['all', kind('route'), ['==', ['get', 'stroke'], stroke]], layout: { 'line-join': 'round' }, paint: { 'line-color': ink.ink, 'line-width': 2.5, ...(dashes.length === 0 ? {} : { 'line-dasharray': [...dashes] }) } })),
    { id: 'route-figures', type: 'symbol', source: 'lines', filter: ['all', kind('route'), ['!=', ['get', 'text'], '']], layout: { 'symbol-placement': 'line', 'symbol-spacing': 160, 'text-field': ['get', 'text'], 'text-font': label, 'text-size': 13, 'text-rotation-alignment': 'viewport' }, paint: { 'text-color': ink.ink, 'text-halo-color': ink.ground, 'text-halo-width': 3 } },
    { id: 'row-numbers', type: 'symbol', source: 'rowEnds', minzoom: 17.5, layout: { 'text-field': ['get', 'label'], 'text-font': label, 'text-size': 11, 'text-anchor': 'center' }, paint: { 'text-color': ink.ink, 'text-halo-color': ink.land, 'text-halo-width': 2 } },
    { id: 'pills', type: 'symbol', source: 'pills', minzoom: 13.5, layout: { 'icon-image': ['get', 'image'], 'icon-allow-overlap': true, 'icon-ignore-placement': true } },
    { id: 'points', type: 'symbol', source: 'points', layout: { 'icon-image': ['get', 'image'], 'icon-allow-overlap': true, 'text-field': ['get', 'text'], 'text-font': label, 'text-size': 11, 'text-anchor': 'left', 'text-offset': [0.9, 0], 'text-optional': true }, paint: { 'text-color': ink.ink, 'text-halo-color': ink.ground, 'text-halo-width': 2 } },
    { id: 'names', type: 'symbol', source: 'names', minzoom: 12, layout: { 'text-field': ['get', 'name'], 'text-font': label, 'text-size': 13, 'text-anchor': 'bottom', 'text-offset': [0, -0.45], 'text-rotate': ['get', 'turn'], 'text-rotation-alignment': 'map', 'text-allow-overlap': false, 'text-padding': 4 }, paint: { 'text-color': ink.ink, 'text-halo-color': ink.land, 'text-halo-width': 3.2 } },
    // Outside the corner and above names: a letter under a name tells nothing.
    { id: 'ghost-flags', type: 'symbol', source: 'ghostFlags', layout: { 'icon-image': ['get', 'image'], 'icon-allow-overlap': true, 'icon-ignore-placement': true, 'icon-anchor': 'bottom-right' } },
  ];
}

function rowLines(id: string, range: { minzoom: number; maxzoom?: number; filter?: ExpressionSpecification }): LayerSpecification[] {
  return [
    { id: `${id}-groove`, type: 'line', source: 'rows', ...range, paint: { 'line-color': '#1C2B33', 'line-width': 1.6, 'line-opacity': 0.16 } },
    { id, type: 'line', source: 'rows', ...range, paint: { 'line-color': '#F6F4EE', 'line-width': 0.7, 'line-opacity': 0.4 } },
  ];
}

export function mapStyle(ink: MapInk): StyleSpecification {
  const sources: StyleSpecification['sources'] = {};
  // Zone borders are shared with neighbours: simplified apart from each other they would gape.
  for (const source of mapSources) sources[source] = { type: 'geojson', data: { type: 'FeatureCollection', features: [] }, promoteId: 'id', tolerance: source === 'zones' ? 0 : 0.375 };
  return { version: 8, 'font-faces': { Label: labelFontUrl }, sources, layers: mapLayers(ink) };
}
