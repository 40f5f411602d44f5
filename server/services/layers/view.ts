import { layerTypeIds } from '../../../shared/catalog/layerTypes.ts';
import { findingSeverities, type BlockLayerView, type Readiness } from '../../../shared/contracts/layers.ts';
import type { Access } from '../../access/access.ts';
import { Block } from '../../models/Block.ts';
import { BlockLayer } from '../../models/BlockLayer.ts';
import { FileImport } from '../../models/FileImport.ts';
import { Layer } from '../../models/Layer.ts';
import { Person } from '../../models/Person.ts';

/** Layers of a block with everything but their cells, newest first; what is derived follows its source. */
export async function listLayers(access: Access, blockId: string): Promise<BlockLayerView[]> {
  const { estateId } = access;
  const block = await Block.query().findOne({ estateId, id: blockId }).whereNull('retiredAt').select('id', 'gridKey').throwIfNotFound();
  const onBlock = await BlockLayer.query().where({ estateId, blockId }).select('id', 'layerId', 'gridKey', 'coverage', 'statistics', 'findings', 'override', BlockLayer.raw("survey - 'aside' as survey"));
  const layers = await Layer.query().where({ estateId }).whereNull('retiredAt').whereIn('id', onBlock.map((row) => row.layerId)).orderBy('createdAt', 'desc');
  const imports = await FileImport.query().where({ estateId }).whereIn('id', layers.flatMap((layer) => layer.importId ?? [])).select('id', 'fileId');
  const people = await Person.query().findByIds(layers.flatMap((layer) => layer.createdBy ?? [])).select('id', 'name');
  const views = layers.map((layer): BlockLayerView => {
    const here = onBlock.find((row) => row.layerId === layer.id)!;
    const { fileName = null, sha256 = null, value = null, pixelSizeM = null, reference = null, answers = {} } = layer.source;
    return {
      id: layer.id,
      blockId,
      type: layer.type,
      name: layer.name,
      unit: layer.unit,
      measuredOn: layer.measuredOn,
      coverage: here.coverage,
      statistics: here.statistics,
      findings: gravestFirst(here.findings),
      readiness: readinessOf(here, block.gridKey),
      override: here.override === null ? null : { by: here.override.by, reason: here.override.reason, at: here.override.at },
      survey: here.survey,
      classes: layer.classes,
      gridKey: here.gridKey,
      derivedFrom: layer.derivedFrom,
      source: { fileId: imports.find((each) => each.id === layer.importId)?.fileId ?? null, fileName, sha256, value, pixelSizeM, reference, answers },
      createdBy: people.find((person) => person.id === layer.createdBy)?.name ?? null,
      createdAt: layer.createdAt.toISOString(),
    };
  });
  const sources = views.filter((view) => view.derivedFrom === null || views.every((other) => other.id !== view.derivedFrom));
  const inOrder = (derived: BlockLayerView[]) => [...derived].sort((a, b) => layerTypeIds.indexOf(a.type) - layerTypeIds.indexOf(b.type));
  return sources.flatMap((source) => [source, ...inOrder(views.filter((view) => view.derivedFrom === source.id))]);
}

function gravestFirst(findings: BlockLayer['findings']): BlockLayer['findings'] {
  return [...findings].sort((a, b) => findingSeverities.indexOf(a.severity) - findingSeverities.indexOf(b.severity));
}

/** What a layer may be used for, gravest reason first. */
export function readinessOf(row: Pick<BlockLayer, 'gridKey' | 'findings' | 'override'>, gridKey: string): Readiness {
  if (row.gridKey !== gridKey) return 'stale';
  if (row.findings.some((finding) => finding.severity === 'red')) return row.override === null ? 'blocked' : 'overridden';
  return row.findings.some((finding) => finding.severity === 'amber') ? 'doubt' : 'ready';
}
