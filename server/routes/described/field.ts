import { z } from 'zod';
import { bagBatch, bagBatchAnswer, bagList, bagQuery, bagReceipt, bagReceiptAnswer, bagSwap, bagsChanged, bagsExpected, bagsMissing, clashChoice } from '../../../shared/contracts/bags.ts';
import { conflictChoice, conflictList } from '../../../shared/contracts/conflicts.ts';
import { fieldPhotoView } from '../../../shared/contracts/fieldPhotos.ts';
import { blankLabels, crewSheet, daySheet, ofBlock, ofBlockOrPlan, roundLabels, whoseWalk } from '../../../shared/contracts/queries.ts';
import { batchAnswer, readingBatch, readingExclusion, readingQuery, readingView } from '../../../shared/contracts/readings.ts';
import { fieldRound, newDay, newRound, roundChange, roundSummary } from '../../../shared/contracts/rounds.ts';
import { belowEstate, listOf, made, type Operations } from './operation.ts';

/** Rounds, readings, conflicts, bags and photos. */
export const field: Operations = belowEstate({
  'post /plans/day/rounds': { does: 'Send the plans of several blocks to the same people as one day, in order', body: newDay, answer: z.object({ items: z.array(made) }), status: 201 },
  'post /plans/:planId/rounds': { does: 'Send the vines of a plan to people for a day', body: newRound, answer: made, status: 201 },
  'get /rounds/day-sheet': { does: 'The order of everybody’s blocks on a day as PDF, a page a person; crew their own', query: daySheet, type: 'application/pdf' },
  'get /rounds': { does: 'Rounds; crew see their own', query: ofBlockOrPlan, answer: listOf(roundSummary) },
  'get /rounds/:roundId': { does: 'All that a phone needs for a day', query: whoseWalk, answer: fieldRound },
  'patch /rounds/:roundId': { does: 'Open, close or call off a round', body: roundChange, status: 204 },
  'post /rounds/:roundId/acknowledge': { does: 'Note that a round was seen', status: 204 },
  'get /rounds/:roundId/sheet': { does: 'A round on paper; crew get their own walk', query: crewSheet, type: 'application/pdf' },
  'post /rounds/:roundId/labels': { does: 'Bag labels of a round as PDF: sheet (a4, letter) or single; the same labels again when asked again', query: roundLabels, type: 'application/pdf' },
  'post /labels': { does: 'Blank bag labels as PDF, bound when a bag is closed', query: blankLabels, type: 'application/pdf' },
  'get /readings': { does: 'Readings, a page at a time', query: readingQuery, answer: z.object({ items: z.array(readingView), next: z.string().nullable() }) },
  'post /readings': { does: 'Append readings; may be repeated', body: readingBatch, answer: batchAnswer },
  'put /readings/:readingId/exclusion': { does: 'Leave a reading out of the figures with a reason, or take it in again', body: readingExclusion, status: 204 },
  'get /conflicts': { does: 'Readings and bags that contradict each other', answer: conflictList },
  'post /conflicts/:conflictId/settle': { does: 'Settle a conflict; both readings stay', body: conflictChoice, status: 204 },
  'post /conflicts/:conflictId/reopen': { does: 'Take a mistaken answer to a conflict back', status: 204 },
  'get /bags': { does: 'Bags with where they stand: expected, here, missing, extra', query: bagQuery, answer: bagList },
  'post /bags': { does: 'Store bags closed in the row; may be repeated; a label used twice is a conflict', body: bagBatch, answer: bagBatchAnswer },
  'post /bags/received': { does: 'Take bags in at the lab by their labels', body: bagReceipt, answer: bagReceiptAnswer },
  'post /bags/missing': { does: 'Say that bags are not at the lab', body: bagsMissing, answer: bagsChanged },
  'post /bags/expected': { does: 'Take back that bags are missing: they are on their way again', body: bagsExpected, answer: bagsChanged },
  'post /bags/swap': { does: 'Exchange the labels of two bags, with their results, for a reason', body: bagSwap, status: 204 },
  'post /bags/:bagId/settle': { does: 'Settle a label that is on two bags', body: clashChoice, status: 204 },
  'post /bags/:bagId/reopen': { does: 'Take a mistaken answer to a label on two bags back', status: 204 },
  'get /field-photos': { does: 'Photos of vines', query: ofBlock, answer: listOf(fieldPhotoView) },
  'post /field-photos': { does: 'Send one photo in the multipart field "files" with its facts as JSON in the field "facts"; may be repeated', files: true, answer: made, status: 201 },
  'get /field-photos/:photoId': { does: 'A photo, without place and device in the file', type: 'image/jpeg' },
});
