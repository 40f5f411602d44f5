import { z } from 'zod';
import { bagBatch, bagBatchAnswer, bagList, bagReceipt, bagReceiptAnswer, bagsMissing, bagSwap, clashChoice } from '../../shared/contracts/bags.ts';
import { blockChange, blockLine, blockView, changedBlock, newBlock, outlineCheck, outlineToCheck } from '../../shared/contracts/blocks.ts';
import { estateChange, estateFacts, newEstate, seasonChange } from '../../shared/contracts/estate.ts';
import { arrivedUploads, importPatch, importView, outlinesMade, outlinesTaken } from '../../shared/contracts/imports.ts';
import { earlierFileView, earlierStore, earlierTakeBack } from '../../shared/contracts/earlier.ts';
import { exclusionRequest, labBench, labFileAnswers, labFileStore, labFileView, labOutcome, labResultBatch, stateChange } from '../../shared/contracts/lab.ts';
import { lotChange, lotParts, lotsBoard, newLot, newScenario, newTank, tankChange } from '../../shared/contracts/lots.ts';
import { newNotice } from '../../shared/contracts/notices.ts';
import { resultsView, ripeningView } from '../../shared/contracts/results.ts';
import { newTicket, reviewView } from '../../shared/contracts/tickets.ts';
import { jobView } from '../../shared/contracts/jobs.ts';
import { planBasis } from '../../shared/contracts/planBasis.ts';
import { newPlan, planChange, planRedraw } from '../../shared/contracts/planChoices.ts';
import { divisionQuestion, planStanding, planView, zoneDivision } from '../../shared/contracts/plans.ts';
import { dayQuestion, dayWalk, planWalk } from '../../shared/contracts/planWalks.ts';
import { asideReading, blockLayerView, cleaningChange, layerBeside, layerChange, overrideChange, reliefView } from '../../shared/contracts/layers.ts';
import { batchAnswer, readingBatch } from '../../shared/contracts/readings.ts';
import { blockRows, censusChange, numberingChange } from '../../shared/contracts/rows.ts';
import { fieldRound, newDay, newRound, roundChange } from '../../shared/contracts/rounds.ts';
import { weatherDay, weatherFile, weatherReading, weatherView } from '../../shared/contracts/weather.ts';
import { invitationAnswer, newInvitation, rolesChange } from '../../shared/contracts/people.ts';
import { openSession, passwordChange, resetAnswer, resetRequest } from '../../shared/contracts/account.ts';
import { searchAnswer } from '../../shared/contracts/search.ts';
import { todayView } from '../../shared/contracts/today.ts';
import { credentials, personChange, session } from '../../shared/contracts/session.ts';
import { exportFormatLine, newZoning, publishEffects, publishRequest, revisionOnly, zoneEditLine, zoneEditRequest, zoningChange, zoningComparison, zoningDoubt, zoningLine, zoningPresence, zoningSeasons, zoningView } from '../../shared/contracts/zonings.ts';

interface Operation {
  method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  path: string;
  summary: string;
  body?: z.ZodType;
  answer?: z.ZodType;
}

/** One row an operation that the outside may rely on; bodies and answers are the contracts themselves. */
const operations: Operation[] = [
  { method: 'get', path: '/api/session', summary: 'Who is signed in, in which estates, with which reach', answer: session },
  { method: 'post', path: '/api/session', summary: 'Sign in', body: credentials, answer: session },
  { method: 'delete', path: '/api/session', summary: 'Sign out' },
  { method: 'patch', path: '/api/session/person', summary: 'Change own name, language, units or theme', body: personChange, answer: session },
  { method: 'put', path: '/api/account/password', summary: 'Set a new password with the old one; other sessions end', body: passwordChange },
  { method: 'get', path: '/api/account/sessions', summary: 'Where one is signed in', answer: z.object({ items: z.array(openSession), total: z.int() }) },
  { method: 'delete', path: '/api/account/sessions', summary: 'End all other sessions' },
  { method: 'delete', path: '/api/account/sessions/{key}', summary: 'End one session' },
  { method: 'post', path: '/api/password-resets', summary: 'Ask for a link that sets a new password; the answer is always the same', body: resetRequest },
  { method: 'post', path: '/api/password-resets/use', summary: 'Set a new password with a link, once', body: resetAnswer },
  { method: 'post', path: '/api/invitations/accept', summary: 'Join an estate with an invitation', body: invitationAnswer, answer: session },
  { method: 'post', path: '/api/estates', summary: 'Make an estate', body: newEstate },
  { method: 'patch', path: '/api/estates/{estateId}', summary: 'Change an estate', body: estateChange },
  { method: 'patch', path: '/api/estates/{estateId}/seasons/{seasonId}', summary: 'Move the phases of a season', body: seasonChange },
  { method: 'get', path: '/api/estates/{estateId}/facts', summary: 'What the estate says of itself, its settings, and backups', answer: estateFacts },
  { method: 'post', path: '/api/estates/{estateId}/invitations', summary: 'Invite a person', body: newInvitation },
  { method: 'post', path: '/api/estates/{estateId}/invitations/{invitationId}/resend', summary: 'Send an invitation once more, with a new link' },
  { method: 'get', path: '/api/estates/{estateId}/today', summary: 'What waits for the person today', answer: todayView },
  { method: 'get', path: '/api/estates/{estateId}/search', summary: 'Things whose name answers (?q=)', answer: searchAnswer },
  { method: 'put', path: '/api/estates/{estateId}/people/{personId}/roles', summary: 'Set the roles of a person', body: rolesChange },
  { method: 'get', path: '/api/estates/{estateId}/blocks', summary: 'Blocks with area, vines, zones in force, next round and restriction', answer: z.object({ items: z.array(blockLine), total: z.int() }) },
  { method: 'post', path: '/api/estates/{estateId}/blocks', summary: 'Make a block from its outline and facts; its rows are laid', body: newBlock, answer: changedBlock },
  { method: 'post', path: '/api/estates/{estateId}/blocks/check', summary: 'What an outline would come to; saves nothing', body: outlineToCheck, answer: outlineCheck },
  { method: 'get', path: '/api/estates/{estateId}/blocks/{blockId}', summary: 'A block, with its version as ETag', answer: blockView },
  { method: 'patch', path: '/api/estates/{estateId}/blocks/{blockId}', summary: 'Change facts or outline; needs If-Match', body: blockChange, answer: changedBlock },
  { method: 'delete', path: '/api/estates/{estateId}/blocks/{blockId}', summary: 'Take a block out of use; needs If-Match' },
  { method: 'get', path: '/api/estates/{estateId}/blocks/{blockId}/rows', summary: 'Rows with pieces, numbers and known vines', answer: blockRows },
  { method: 'put', path: '/api/estates/{estateId}/blocks/{blockId}/rows', summary: 'Number rows and vines anew; needs If-Match', body: numberingChange, answer: blockRows },
  { method: 'put', path: '/api/estates/{estateId}/blocks/{blockId}/vines', summary: 'Mark vines as missing, dead, replant, off-type or sick', body: censusChange },
  { method: 'get', path: '/api/estates/{estateId}/blocks/{blockId}/layers', summary: 'Layers of a block with statistics and findings', answer: z.object({ items: z.array(blockLayerView), total: z.int() }) },
  { method: 'get', path: '/api/estates/{estateId}/relief', summary: 'Heights of the land round all blocks, for maps', answer: reliefView.nullable() },
  { method: 'get', path: '/api/estates/{estateId}/layers/{layerId}/cells', summary: 'Cells of a layer on a block (?block=), bytes; the grid is in the header x-grid' },
  { method: 'patch', path: '/api/estates/{estateId}/layers/{layerId}', summary: 'Change name, unit, day or legend of a layer', body: layerChange },
  { method: 'get', path: '/api/estates/{estateId}/layers/{layerId}/aside', summary: 'Readings that were set aside on a block (?block=), with place and reason', answer: z.object({ items: z.array(asideReading), total: z.int() }) },
  { method: 'get', path: '/api/estates/{estateId}/layers/{layerId}/beside', summary: 'The other layers on a block (?block=): how alike they are, and how far those of its kind lie off', answer: z.object({ items: z.array(layerBeside), total: z.int() }) },
  { method: 'put', path: '/api/estates/{estateId}/layers/{layerId}/cleaning', summary: 'Take reasons for setting readings aside back; the layer is made anew', body: cleaningChange, answer: z.object({ jobId: z.uuid() }) },
  { method: 'post', path: '/api/estates/{estateId}/layers/{layerId}/override', summary: 'Use a layer in spite of red findings, with a reason', body: overrideChange },
  { method: 'delete', path: '/api/estates/{estateId}/layers/{layerId}', summary: 'Take a layer out of use' },
  { method: 'get', path: '/api/estates/{estateId}/imports', summary: 'Lines of the import desk', answer: z.object({ items: z.array(importView), total: z.int() }) },
  { method: 'post', path: '/api/estates/{estateId}/imports', summary: 'Send files in the multipart field "files"; one line a file', answer: z.object({ items: z.array(importView), total: z.int() }) },
  { method: 'post', path: '/api/estates/{estateId}/imports/pieces', summary: 'Begin to send a large file in pieces, by the tus protocol 1.0; go on with PATCH at the Location' },
  { method: 'post', path: '/api/estates/{estateId}/imports/arrived', summary: 'Take in files that were sent in pieces; one line a file', body: arrivedUploads, answer: z.object({ items: z.array(importView), total: z.int() }) },
  { method: 'get', path: '/api/estates/{estateId}/imports/{importId}', summary: 'What was understood of a file, and what is asked', answer: importView },
  { method: 'patch', path: '/api/estates/{estateId}/imports/{importId}', summary: 'Answer questions; when none is left the layer is placed', body: importPatch, answer: importView },
  { method: 'post', path: '/api/estates/{estateId}/imports/{importId}/blocks', summary: 'Make blocks of outlines in a file, all or none', body: outlinesTaken, answer: outlinesMade },
  { method: 'delete', path: '/api/estates/{estateId}/imports/{importId}', summary: 'Take a line off the import desk' },
  { method: 'get', path: '/api/estates/{estateId}/files/{fileId}/download', summary: 'An original, byte for byte' },
  { method: 'get', path: '/api/formats', summary: 'Formats that zones can be exported in', answer: z.object({ items: z.array(exportFormatLine), total: z.int() }) },
  { method: 'post', path: '/api/estates/{estateId}/blocks/{blockId}/zonings', summary: 'Ask for a zoning; answers 202 with the job that computes it', body: newZoning, answer: z.object({ zoningId: z.uuid(), jobId: z.uuid(), together: z.array(z.object({ blockId: z.uuid(), zoningId: z.uuid(), jobId: z.uuid() })) }) },
  { method: 'get', path: '/api/estates/{estateId}/blocks/{blockId}/zonings', summary: 'Zonings of a block, newest first', answer: z.object({ items: z.array(zoningLine), total: z.int() }) },
  { method: 'get', path: '/api/estates/{estateId}/zonings', summary: 'Zonings of the estate, newest first (?block=)', answer: z.object({ items: z.array(zoningLine), total: z.int() }) },
  { method: 'get', path: '/api/estates/{estateId}/zones', summary: 'Zones in force over the estate, as GeoJSON' },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}', summary: 'A zoning with verdict, evidence and zones (?zones= shows another number)', answer: zoningView },
  { method: 'patch', path: '/api/estates/{estateId}/zonings/{zoningId}', summary: 'Name a zoning, or keep a number of its zones as a draft', body: zoningChange, answer: zoningView },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/labels', summary: 'Zone numbers cell by cell, a byte a cell; the grid is in the header x-grid-key' },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/edits', summary: 'Changes made by hand, in order', answer: z.object({ items: z.array(zoneEditLine), total: z.int() }) },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/edits', summary: 'Change a draft by hand; 412 when somebody else did meanwhile', body: zoneEditRequest, answer: zoningView },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/undo', summary: 'Take the last change back', body: revisionOnly, answer: zoningView },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/redo', summary: 'Bring the last change taken back again', body: revisionOnly, answer: zoningView },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/effects', summary: 'What publishing a draft would touch', answer: publishEffects },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/compare', summary: 'Two zonings of a block vine by vine (?with=)', answer: zoningComparison },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/doubt', summary: 'Vines that fit another zone nearly as well, counted and drawn (?zones=)', answer: zoningDoubt },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/seasons', summary: 'Agreement with the zones and layers of other seasons', answer: zoningSeasons },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/presence', summary: 'Says that one has the zones open to edit; answers who else has', answer: zoningPresence },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/publish', summary: 'Put a draft in force; the zones in force are retired', body: publishRequest, answer: zoningView },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/restore', summary: 'Take zones up again as a new draft', answer: z.object({ id: z.uuid() }) },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/export', summary: 'Zones as a file (?format= one of /api/formats, ?zones=)' },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/report', summary: 'A zoning on paper, as PDF (?size=A4 or Letter, ?zones=)' },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/plan-basis', summary: 'What a plan on these zones is computed from', answer: planBasis },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/plans', summary: 'Make a sampling plan and draw its vines', body: newPlan, answer: planView },
  { method: 'get', path: '/api/estates/{estateId}/plans/{planId}', summary: 'A plan with its vines', answer: planView },
  { method: 'patch', path: '/api/estates/{estateId}/plans/{planId}', summary: 'Change a draft plan', body: planChange, answer: planView },
  { method: 'post', path: '/api/estates/{estateId}/plans/{planId}/lock', summary: 'Keep the vines of a plan as drawn', answer: planView },
  { method: 'post', path: '/api/estates/{estateId}/plans/{planId}/redraw', summary: 'Draw other vines, with a reason', body: planRedraw, answer: planView },
  { method: 'post', path: '/api/estates/{estateId}/plans/day', summary: 'Plans of several blocks in the quickest order from gate to gate', body: dayQuestion, answer: dayWalk },
  { method: 'get', path: '/api/estates/{estateId}/plans/{planId}/walk', summary: 'The walk past the vines from a gate, shared among people, as lines on the map', answer: planWalk },
  { method: 'get', path: '/api/estates/{estateId}/plans/{planId}/standing', summary: 'How far each zone is with what was read: enough here, or so many more', answer: z.object({ items: z.array(planStanding) }) },
  { method: 'post', path: '/api/estates/{estateId}/zonings/{zoningId}/divisions', summary: 'Zones that a plan asks too much of, divided where their readings say that this saves work', body: divisionQuestion, answer: z.object({ items: z.array(zoneDivision) }) },
  { method: 'get', path: '/api/estates/{estateId}/plans/{planId}/export', summary: 'The vines of a plan as a file (format=csv, gpx, geojson, shapefile, geopackage or kml)' },
  { method: 'post', path: '/api/estates/{estateId}/plans/day/rounds', summary: 'Send the plans of several blocks to the same people as one day, in order', body: newDay },
  { method: 'get', path: '/api/estates/{estateId}/rounds/day-sheet', summary: 'The order of everybody’s blocks on a day as PDF, a page a person; crew their own' },
  { method: 'post', path: '/api/estates/{estateId}/plans/{planId}/rounds', summary: 'Send the vines of a plan to people for a day', body: newRound },
  { method: 'get', path: '/api/estates/{estateId}/rounds', summary: 'Rounds; crew see their own' },
  { method: 'get', path: '/api/estates/{estateId}/rounds/{roundId}', summary: 'All that a phone needs for a day', answer: fieldRound },
  { method: 'patch', path: '/api/estates/{estateId}/rounds/{roundId}', summary: 'Open, close or call off a round', body: roundChange },
  { method: 'post', path: '/api/estates/{estateId}/rounds/{roundId}/acknowledge', summary: 'Note that a round was seen' },
  { method: 'get', path: '/api/estates/{estateId}/bags', summary: 'Bags with where they stand: expected, here, missing, extra', answer: bagList },
  { method: 'post', path: '/api/estates/{estateId}/bags', summary: 'Store bags closed in the row; may be repeated; a label used twice is a conflict', body: bagBatch, answer: bagBatchAnswer },
  { method: 'post', path: '/api/estates/{estateId}/bags/received', summary: 'Take bags in at the lab by their labels', body: bagReceipt, answer: bagReceiptAnswer },
  { method: 'post', path: '/api/estates/{estateId}/bags/missing', summary: 'Say that bags are not at the lab', body: bagsMissing },
  { method: 'post', path: '/api/estates/{estateId}/bags/swap', summary: 'Exchange the labels of two bags, with their results, for a reason', body: bagSwap },
  { method: 'post', path: '/api/estates/{estateId}/bags/{bagId}/settle', summary: 'Settle a label that is on two bags', body: clashChoice },
  { method: 'get', path: '/api/estates/{estateId}/lab', summary: 'Bags, measures and figures on the bench, and how the figures stand to each other', answer: labBench },
  { method: 'post', path: '/api/estates/{estateId}/lab/results', summary: 'Store typed figures as provisional results; may be repeated', body: labResultBatch, answer: z.object({ outcomes: z.array(labOutcome) }) },
  { method: 'put', path: '/api/estates/{estateId}/lab/results/state', summary: 'Mark results as provisional, checked or final', body: stateChange },
  { method: 'put', path: '/api/estates/{estateId}/lab/results/{resultId}/exclusion', summary: 'Leave a result out with a reason, propose it, or take it in again', body: exclusionRequest },
  { method: 'post', path: '/api/estates/{estateId}/lab/files', summary: 'Send one file of a laboratory in the multipart field "files"; stores no result', answer: labFileView },
  { method: 'get', path: '/api/estates/{estateId}/lab/files/{fileId}', summary: 'What was understood of a file, what is asked, and what would be stored', answer: labFileView },
  { method: 'patch', path: '/api/estates/{estateId}/lab/files/{fileId}', summary: 'Answer questions about a file', body: labFileAnswers, answer: labFileView },
  { method: 'post', path: '/api/estates/{estateId}/lab/files/{fileId}/store', summary: 'Store the results of a file when no question is open', body: labFileStore, answer: labFileView },
  { method: 'get', path: '/api/estates/{estateId}/lab/files/{fileId}/original', summary: 'The file of a laboratory, byte for byte' },
  { method: 'get', path: '/api/estates/{estateId}/earlier-readings', summary: 'Tables of readings of earlier visits, newest first', answer: z.object({ items: z.array(earlierFileView), total: z.int() }) },
  { method: 'post', path: '/api/estates/{estateId}/earlier-readings', summary: 'Send one table of readings of earlier visits in the multipart field "files"; stores no reading', answer: earlierFileView },
  { method: 'get', path: '/api/estates/{estateId}/earlier-readings/{earlierFileId}', summary: 'What was understood of a table, what is asked, and what would be stored', answer: earlierFileView },
  { method: 'patch', path: '/api/estates/{estateId}/earlier-readings/{earlierFileId}', summary: 'Answer questions about a table', body: labFileAnswers, answer: earlierFileView },
  { method: 'post', path: '/api/estates/{estateId}/earlier-readings/{earlierFileId}/store', summary: 'Store the readings of a table, all or none; may be repeated', body: earlierStore, answer: earlierFileView },
  { method: 'post', path: '/api/estates/{estateId}/earlier-readings/{earlierFileId}/take-back', summary: 'Leave all readings of a table out of the figures, for a reason', body: earlierTakeBack, answer: earlierFileView },
  { method: 'delete', path: '/api/estates/{estateId}/earlier-readings/{earlierFileId}', summary: 'Put a table aside of which nothing is stored' },
  { method: 'get', path: '/api/estates/{estateId}/earlier-readings/{earlierFileId}/original', summary: 'The table itself, byte for byte' },
  { method: 'post', path: '/api/estates/{estateId}/rounds/{roundId}/labels', summary: 'Bag labels of a round as PDF: sheet (a4, letter) or single; the same labels again when asked again' },
  { method: 'post', path: '/api/estates/{estateId}/labels', summary: 'Blank bag labels as PDF, bound when a bag is closed' },
  { method: 'post', path: '/api/estates/{estateId}/readings', summary: 'Append readings; may be repeated', body: readingBatch, answer: batchAnswer },
  { method: 'get', path: '/api/estates/{estateId}/zonings/{zoningId}/results', summary: 'Means by zone, measure and day, with ranges and how many readings are missing', answer: resultsView },
  { method: 'get', path: '/api/estates/{estateId}/blocks/{blockId}/ripening', summary: 'Series by zone with change, trend and forecast', answer: ripeningView },
  { method: 'get', path: '/api/estates/{estateId}/lots', summary: 'Lots of a scenario, zones with what is free, tanks', answer: lotsBoard },
  { method: 'post', path: '/api/estates/{estateId}/lots', summary: 'Make a pick lot', body: newLot },
  { method: 'patch', path: '/api/estates/{estateId}/lots/{lotId}', summary: 'Change name, wine, date or tank of a lot (If-Match)', body: lotChange },
  { method: 'put', path: '/api/estates/{estateId}/lots/{lotId}/parts', summary: 'Set the zones of a lot, whole or by rows (If-Match)', body: lotParts },
  { method: 'post', path: '/api/estates/{estateId}/lots/{lotId}/confirm', summary: 'Confirm a lot and its date (If-Match)' },
  { method: 'post', path: '/api/estates/{estateId}/lots/{lotId}/reopen', summary: 'Make a confirmed lot a draft again; its notice is void from then on (If-Match)' },
  { method: 'post', path: '/api/estates/{estateId}/scenarios', summary: 'Copy the lots as a what-if', body: newScenario },
  { method: 'post', path: '/api/estates/{estateId}/tanks', summary: 'Add a tank', body: newTank },
  { method: 'patch', path: '/api/estates/{estateId}/tanks/{tankId}', summary: 'Change a tank', body: tankChange },
  { method: 'get', path: '/api/estates/{estateId}/notices', summary: 'Pick notices, newest first' },
  { method: 'post', path: '/api/estates/{estateId}/lots/{lotId}/notices', summary: 'Send the next pick notice of a confirmed lot', body: newNotice },
  { method: 'post', path: '/api/estates/{estateId}/notices/{noticeId}/read', summary: 'Note that a notice was read' },
  { method: 'post', path: '/api/estates/{estateId}/tickets', summary: 'Enter a scale ticket, or one that corrects another', body: newTicket },
  { method: 'get', path: '/api/estates/{estateId}/review', summary: 'Forecast against scale, and whether zones mattered', answer: reviewView },
  { method: 'get', path: '/api/estates/{estateId}/weather', summary: 'Temperatures and rain by day, with the heat of the season', answer: weatherView },
  { method: 'put', path: '/api/estates/{estateId}/weather', summary: 'Keep the weather of a day', body: weatherDay },
  { method: 'delete', path: '/api/estates/{estateId}/weather/{day}', summary: 'Take a day out' },
  { method: 'post', path: '/api/estates/{estateId}/weather/import', summary: "Read a station's table back; with apply, keep all of it", body: weatherFile, answer: weatherReading },
  { method: 'get', path: '/api/estates/{estateId}/jobs/{jobId}', summary: 'Progress of a job', answer: jobView },
];

/** The interface in OpenAPI 3.1, made from the contracts that the server checks with. */
export function describedApi(): Record<string, unknown> {
  const paths: Record<string, Record<string, unknown>> = {};
  for (const { method, path, summary, body, answer } of operations) {
    const json = (schema: z.ZodType, io: 'input' | 'output') => ({ content: { 'application/json': { schema: z.toJSONSchema(schema, { io, unrepresentable: 'any' }) } } });
    paths[path] = {
      ...paths[path],
      [method]: {
        summary,
        ...(body ? { requestBody: { required: true, ...json(body, 'input') } } : {}),
        responses: { '200': { description: 'Done', ...(answer ? json(answer, 'output') : {}) }, default: { description: 'Problem', content: { 'application/problem+json': {} } } },
      },
    };
  }
  return { openapi: '3.1.0', info: { title: 'Patchrow', version: '1' }, paths };
}
