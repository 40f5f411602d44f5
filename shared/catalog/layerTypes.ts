/** How values reach the grid: area-weighted mean of numbers, or the class with the largest share. */
export type Resampling = 'mean' | 'class';

/** Evidence is measured on the vines or in the soil of this block; context only describes the place. */
export type LayerRole = 'evidence' | 'context';

export type RampName = 'vigour' | 'conductivity' | 'terrain' | 'ripeness' | 'difference' | 'classes';

export interface LayerType {
  readonly id: string;
  readonly unit: string;
  readonly role: LayerRole;
  readonly resampling: Resampling;
  readonly ramp: RampName;
  /** Values outside are refused as impossible for this layer; null means open. */
  readonly min: number | null;
  readonly max: number | null;
  readonly decimals: number;
  /** Made from another layer by the program, not offered for upload. */
  readonly derived: boolean;
  /** A picture in which vine rows show; zoning smooths them away. Points are averages of their neighbours already. */
  readonly showsRows: boolean;
}

const row = (id: string, rest: Omit<LayerType, 'id' | 'derived' | 'showsRows'> & { derived?: boolean; showsRows?: boolean }): LayerType => ({ derived: false, showsRows: false, ...rest, id });

/** Everything that differs between layer types; forms, checks, colours and legends read this table. */
export const layerTypes = [
  row('vigour', { unit: '', role: 'evidence', resampling: 'mean', ramp: 'vigour', min: -1, max: 60, decimals: 2, showsRows: true }),
  row('conductivity', { unit: 'mS/m', role: 'evidence', resampling: 'mean', ramp: 'conductivity', min: 0, max: 2000, decimals: 1 }),
  row('yield', { unit: 't/ha', role: 'evidence', resampling: 'mean', ramp: 'ripeness', min: 0, max: 80, decimals: 1 }),
  row('soilNumber', { unit: '', role: 'context', resampling: 'mean', ramp: 'conductivity', min: null, max: null, decimals: 1 }),
  row('soilClass', { unit: '', role: 'context', resampling: 'class', ramp: 'classes', min: null, max: null, decimals: 0 }),
  row('elevation', { unit: 'm', role: 'context', resampling: 'mean', ramp: 'terrain', min: -450, max: 6000, decimals: 1 }),
  row('slope', { unit: '°', role: 'context', resampling: 'mean', ramp: 'terrain', min: 0, max: 90, decimals: 1, derived: true }),
  row('northness', { unit: '', role: 'context', resampling: 'mean', ramp: 'difference', min: -1, max: 1, decimals: 2, derived: true }),
  row('eastness', { unit: '', role: 'context', resampling: 'mean', ramp: 'difference', min: -1, max: 1, decimals: 2, derived: true }),
] as const satisfies readonly LayerType[];

export type LayerTypeId = (typeof layerTypes)[number]['id'];

export const layerTypeIds = layerTypes.map((type) => type.id) as [LayerTypeId, ...LayerTypeId[]];

/** The row of a layer type. Throws on an unknown id: the contract lets none through. */
export function layerType(id: string): LayerType {
  const found = layerTypes.find((type) => type.id === id);
  if (!found) throw new Error(`No layer type "${id}"`);
  return found;
}
