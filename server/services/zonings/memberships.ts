import { decodeFloatCells, decodeLabels } from '../../../shared/analysis/cellBytes.ts';
import { partedBands, type MembershipBands } from '../../../shared/analysis/zoneMemberships.ts';
import type { ZoningMemberships } from '../../../shared/contracts/zonings.ts';
import type { Access } from '../../access/access.ts';
import { Clash } from '../../errors.ts';
import { loadBlockVines } from '../../ground/blockVines.ts';
import { Zoning } from '../../models/Zoning.ts';
import { ZoningCandidate } from '../../models/ZoningCandidate.ts';
import { say } from '../../sentences/say.ts';
import { requireSameOutline } from './editZones.ts';
import { ownNumber } from './view.ts';

/** What a run found cell by cell, for files. */
export interface RunCells {
  labels: Uint8Array;
  /** A plane a zone number. */
  bands: MembershipBands;
  doubt: Float32Array;
}

interface RunMemberships {
  /** Zones as the run found them: memberships say nothing of ground that was moved by hand. */
  labels: Uint8Array;
  joined: Uint8Array;
  doubt: Float32Array;
  /** The zones kept differ from those of the run. */
  changedByHand: boolean;
}

export async function viewMemberships(access: Access, zoningId: string, zoneCount: number | null): Promise<ZoningMemberships> {
  const { labels, joined, changedByHand } = await readMemberships(access, zoningId, zoneCount);
  return { changedByHand, labels: Buffer.from(labels).toString('base64'), memberships: Buffer.from(joined).toString('base64') };
}

export async function loadRunCells(access: Access, zoningId: string, zoneCount: number): Promise<RunCells> {
  const { labels, joined, doubt } = await readMemberships(access, zoningId, zoneCount);
  return { labels, bands: partedBands(joined, labels.length), doubt };
}

/** How far each cell belongs to the zones of one number, as the run saw them. Refuses one zone, and runs from before they were kept. */
async function readMemberships(access: Access, zoningId: string, zoneCount: number | null): Promise<RunMemberships> {
  const zoning = await Zoning.query().findOne({ estateId: access.estateId, id: zoningId }).throwIfNotFound();
  const count = zoneCount ?? ownNumber(zoning);
  const candidate = await ZoningCandidate.query().findOne({ estateId: access.estateId, zoningId, zoneCount: count });
  if (!candidate) throw new Clash('notReady', say('noZonesToExport'));
  requireSameOutline(zoning, await loadBlockVines(access.estateId, zoning.blockId));
  const labels = decodeLabels(candidate.labels);
  const isOne = labels.every((label) => label < 2);
  if (candidate.memberships === null) throw new Clash('noMemberships', say(isOne ? 'noMembershipsOfOne' : 'noMemberships'));
  const isKept = zoning.labels !== null && count === zoning.chosenZones;
  return { labels, joined: decodeLabels(candidate.memberships), doubt: decodeFloatCells(candidate.doubt!), changedByHand: isKept && !zoning.labels!.equals(candidate.labels) };
}
