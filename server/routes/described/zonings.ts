import { z } from 'zod';
import { comparedWith, ofBlock, shownZones, zonesExport, zonesReport } from '../../../shared/contracts/queries.ts';
import { newZoning, publishEffects, publishRequest, revisionOnly, zoneEditLine, zoneEditRequest, zoningChange, zoningComparison, zoningDoubt, zoningLine, zoningMemberships, zoningPresence, zoningSeasons, zoningView } from '../../../shared/contracts/zonings.ts';
import { belowEstate, listOf, type Operations } from './operation.ts';

/** Zonings: asked for, changed by hand, published, taken out. */
export const zonings: Operations = belowEstate({
  'post /blocks/:blockId/zonings': { does: 'Ask for a zoning; answers 202 with the job that computes it', body: newZoning, answer: z.object({ zoningId: z.uuid(), jobId: z.uuid(), together: z.array(z.object({ blockId: z.uuid(), zoningId: z.uuid(), jobId: z.uuid() })) }), status: 202 },
  'get /blocks/:blockId/zonings': { does: 'Zonings of a block, newest first', answer: listOf(zoningLine) },
  'get /zonings': { does: 'Zonings of the estate, newest first', query: ofBlock, answer: listOf(zoningLine) },
  'get /zones': { does: 'Zones in force over the estate, as GeoJSON', type: 'application/geo+json' },
  'get /zonings/:zoningId': { does: 'A zoning with verdict, evidence and zones', query: shownZones, answer: zoningView },
  'get /zonings/:zoningId/labels': { does: 'Zone numbers cell by cell, a byte a cell; the grid is in the header x-grid-key', query: shownZones, type: 'application/octet-stream' },
  'get /zonings/:zoningId/doubt': { does: 'Vines that fit another zone nearly as well, counted and drawn', query: shownZones, answer: zoningDoubt },
  'get /zonings/:zoningId/memberships': { does: 'How far each cell belongs to each zone that the run found, a byte a cell and zone in steps of 1/250, 255 where there is none; planes in the order of the zones', query: shownZones, answer: zoningMemberships },
  'get /zonings/:zoningId/seasons': { does: 'Agreement with the zones and layers of other seasons', answer: zoningSeasons },
  'post /zonings/:zoningId/presence': { does: 'Says that one has the zones open to edit; answers who else has', answer: zoningPresence },
  'patch /zonings/:zoningId': { does: 'Name a zoning, or keep a number of its zones as a draft', body: zoningChange, answer: zoningView },
  'get /zonings/:zoningId/edits': { does: 'Changes made by hand, in order', answer: listOf(zoneEditLine) },
  'post /zonings/:zoningId/edits': { does: 'Change a draft by hand; 412 when somebody else did meanwhile', body: zoneEditRequest, answer: zoningView, status: 201 },
  'get /zonings/:zoningId/effects': { does: 'What publishing a draft would touch', answer: publishEffects },
  'get /zonings/:zoningId/compare': { does: 'Two zonings of a block vine by vine', query: comparedWith, answer: zoningComparison },
  'get /zonings/:zoningId/export': { does: 'Zones as a file', query: zonesExport, type: '*/*' },
  'get /zonings/:zoningId/report': { does: 'A zoning on paper, as PDF', query: zonesReport, type: 'application/pdf' },
  'post /zonings/:zoningId/publish': { does: 'Put a draft in force; the zones in force are retired', body: publishRequest, answer: zoningView },
  'post /zonings/:zoningId/restore': { does: 'Take zones up again as a new draft', answer: z.object({ id: z.uuid() }), status: 201 },
  'post /zonings/:zoningId/undo': { does: 'Take the last change back', body: revisionOnly, answer: zoningView },
  'post /zonings/:zoningId/redo': { does: 'Bring the last change taken back again', body: revisionOnly, answer: zoningView },
});
