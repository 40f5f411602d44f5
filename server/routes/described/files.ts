import { earlierFileView, earlierStore, earlierTakeBack } from '../../../shared/contracts/earlier.ts';
import { arrivedUploads, importPatch, importView, outlinesMade, outlinesTaken } from '../../../shared/contracts/imports.ts';
import { labFileAnswers } from '../../../shared/contracts/lab.ts';
import { belowEstate, listOf, type Operations } from './operation.ts';

/** Files that come in: layers, outlines, readings of earlier visits. */
export const files: Operations = belowEstate({
  'get /imports': { does: 'Lines of the import desk', answer: listOf(importView) },
  'post /imports': { does: 'Send files in the multipart field "files"; one line a file', files: true, answer: listOf(importView), status: 201 },
  'post /imports/pieces': { does: 'Begin to send a large file in pieces, by the tus protocol 1.0; go on with PATCH at the Location', status: 201 },
  'post /imports/arrived': { does: 'Take in files that were sent in pieces; one line a file', body: arrivedUploads, answer: listOf(importView), status: 201 },
  'get /imports/:importId': { does: 'What was understood of a file, and what is asked', answer: importView },
  'patch /imports/:importId': { does: 'Answer questions; when none is left the layer is placed', body: importPatch, answer: importView },
  'post /imports/:importId/blocks': { does: 'Make blocks of outlines in a file, all or none', body: outlinesTaken, answer: outlinesMade, status: 201 },
  'delete /imports/:importId': { does: 'Take a line off the import desk', status: 204 },
  'get /files/:fileId/download': { does: 'An original, byte for byte', type: 'application/octet-stream' },
  'get /earlier-readings': { does: 'Tables of readings of earlier visits, newest first', answer: listOf(earlierFileView) },
  'post /earlier-readings': { does: 'Send one table of readings of earlier visits in the multipart field "files"; stores no reading', files: true, answer: earlierFileView, status: 201 },
  'get /earlier-readings/:earlierFileId': { does: 'What was understood of a table, what is asked, and what would be stored', answer: earlierFileView },
  'patch /earlier-readings/:earlierFileId': { does: 'Answer questions about a table', body: labFileAnswers, answer: earlierFileView },
  'post /earlier-readings/:earlierFileId/store': { does: 'Store the readings of a table, all or none; may be repeated', body: earlierStore, answer: earlierFileView },
  'post /earlier-readings/:earlierFileId/take-back': { does: 'Leave all readings of a table out of the figures, for a reason', body: earlierTakeBack, answer: earlierFileView },
  'delete /earlier-readings/:earlierFileId': { does: 'Put a table aside of which nothing is stored', status: 204 },
  'get /earlier-readings/:earlierFileId/original': { does: 'The table itself, byte for byte', type: 'application/octet-stream' },
});
