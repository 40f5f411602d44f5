import type { Transaction } from 'objection';
import type { ImportNote } from '../../../shared/contracts/imports.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { rowLabels } from '../../../shared/geo/numbering.ts';
import { rowsFromStored } from '../../../shared/geo/storedRows.ts';
import { requireReach, type Access } from '../../access/access.ts';
import { writeAudit } from '../../models/AuditEntry.ts';
import { Block } from '../../models/Block.ts';
import { asGeoJson } from '../../models/geometry.ts';
import type { SourceFile } from '../../placing/placed.ts';
import type { RowBlock, RowsOnBlock } from '../../placing/rowsOfFile.ts';
import { runCompute } from '../../workers/computePool.ts';
import { layRows } from '../blocks/rebuildRows.ts';
import { findBlock } from '../blocks/view.ts';

/** Surveyed rows of a file by block. Laying them changes blocks, which not everybody who brings layers may do. */
export async function findRows(access: Access, source: SourceFile): Promise<RowsOnBlock[]> {
  requireReach(access, 'blocks.edit');
  const blocks = await Block.query().where({ estateId: access.estateId }).whereNull('retiredAt').orderBy('name').select('id', 'epsg', 'vineSpacingM', asGeoJson('boundary').as('boundary'));
  const targets = blocks.map(({ id, epsg, vineSpacingM, boundary }): RowBlock => ({ id, epsg, vineSpacingM, boundary: boundary.coordinates as unknown as MultiPolygonLonLat }));
  return runCompute<RowsOnBlock[]>('rowsOfFile', { source, blocks: targets }, { lane: 'quick' });
}

/** Lays surveyed rows on their blocks: rows that lie where one lay before keep their identity, the others are retired. Returns what became of each block. */
export async function takeRows(trx: Transaction, access: Access, found: readonly RowsOnBlock[], now: Date): Promise<ImportNote[]> {
  const notes: ImportNote[] = [];
  for (const { blockId, rows, labels, rowSpacingM, rowBearingDeg } of found) {
    await Block.query(trx).findOne({ estateId: access.estateId, id: blockId }).whereNull('retiredAt').forUpdate().select('id').throwIfNotFound();
    const block = await findBlock(access, blockId, trx);
    const facts = { rowSpacingM, rowBearingDeg, rowCount: rows.length };
    await Block.query(trx).where({ estateId: access.estateId, id: blockId }).patch({ ...facts, version: block.version + 1 });
    const planted = { ...block, ...facts, boundary: block.boundary.coordinates as unknown as MultiPolygonLonLat };
    const isLabelled = labels.every((label) => label !== null) && new Set(labels).size === labels.length;
    const effects = await layRows(trx, planted, { built: rowsFromStored(planted, rows), labels: isLabelled ? (labels as string[]) : rowLabels(rows.length, block.rowOneSide, block.firstRowLabel).map(String) }, now);
    await writeAudit(trx, access, { action: 'rows.import', subjectType: 'block', subjectId: blockId, subjectName: block.name, before: { rowSpacingM: block.rowSpacingM, rowBearingDeg: block.rowBearingDeg, rowCount: block.rowCount }, after: facts });
    notes.push({
      code: 'rows-laid',
      text: `${rows.length} rows are laid on ${block.name}, ${rowSpacingM} m apart: ${effects.kept} lie where one lay, ${effects.made} are new, ${effects.retired} are no longer there.`,
      params: {
        count: rows.length,
        block: block.name,
        spacingM: rowSpacingM,
        kept: effects.kept,
        made: effects.made,
        retired: effects.retired,
      },
    });
  }
  return notes;
}
