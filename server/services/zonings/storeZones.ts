import type { Transaction } from 'objection';
import { decodeFloatCells, encodeCells } from '../../../shared/analysis/cellBytes.ts';
import type { ZoneMap } from '../../../shared/analysis/edits.ts';
import type { Zone as TracedZone } from '../../../shared/analysis/zoningTypes.ts';
import { zoningOptions } from '../../../shared/contracts/zonings.ts';
import { gridOf, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { loadBlockLayers, zoningLayer } from '../../ground/zoneLayers.ts';
import { fromGeoJson } from '../../models/geometry.ts';
import { Zone } from '../../models/Zone.ts';
import { Zoning } from '../../models/Zoning.ts';
import { ZoningCandidate } from '../../models/ZoningCandidate.ts';
import { runCompute } from '../../workers/computePool.ts';
import { plainFigures } from './plainFigures.ts';
import { countVines } from './view.ts';

/** Zones drawn from labels, outside any transaction: drawing takes a moment. */
export async function drawZones(zoning: Zoning, ground: BlockVines, map: ZoneMap): Promise<TracedZone[]> {
  const grid = gridOf(ground);
  const options = zoningOptions.safeParse(zoning.options);
  const found = options.success ? await loadBlockLayers(zoning.estateId, zoning.blockId, options.data.layers.map(({ layerId }) => layerId)) : [];
  const candidate = await ZoningCandidate.query().findOne({ estateId: zoning.estateId, zoningId: zoning.id, zoneCount: zoning.chosenZones ?? 1 });
  const doubt = candidate?.doubt ? decodeFloatCells(candidate.doubt) : new Float32Array(map.labels.length).fill(Number.NaN);
  return runCompute<TracedZone[]>('traceZones', { grid, labels: map.labels, doubt, layers: found.map((entry) => zoningLayer(entry, 0)) }, { lane: 'quick' });
}

/** Writes labels and zones; a zone that keeps its number keeps its identity, so that plans and lots still know it. */
export async function storeZones(trx: Transaction, zoning: Zoning, change: { ground: BlockVines; map: ZoneMap; drawn: TracedZone[] }): Promise<void> {
  const { ground, map, drawn } = change;
  const { estateId } = zoning;
  const labels = Buffer.from(encodeCells(map.labels));
  const zoneOf = zonesOfVines(ground, { labels, gridKey: zoning.gridKey });
  const known = await Zone.query(trx).where({ estateId, zoningId: zoning.id }).select('id', 'number');
  const gone = known.filter((zone) => !drawn.some(({ number }) => number === zone.number));
  if (gone.length > 0) await Zone.query(trx).where({ estateId }).whereIn('id', gone.map((zone) => zone.id)).delete();
  for (const zone of drawn) {
    const info = map.zones.find(({ number }) => number === zone.number);
    const { vines, missing } = countVines(ground, zoneOf, zone.number);
    const facts = {
      name: info?.name ?? '',
      colour: info?.colour ?? null,
      geometry: fromGeoJson({ type: 'MultiPolygon', coordinates: zone.polygonsLonLat as unknown as number[][][][] }) as never,
      areaM2: zone.areaM2,
      vineCount: vines,
      missingCount: missing,
      statistics: plainFigures({ doubtfulShare: zone.doubtfulShare, patches: zone.patches, layers: zone.layers }),
    };
    const existing = known.find(({ number }) => number === zone.number);
    if (existing) await Zone.query(trx).where({ estateId, id: existing.id }).patch(facts);
    else await Zone.query(trx).insert({ ...facts, estateId, zoningId: zoning.id, number: zone.number });
  }
  await Zoning.query(trx).where({ estateId, id: zoning.id }).patch({ labels, revision: zoning.revision + 1 });
}
