import { z } from 'zod';
import { exclusionRequest, labBench, labFileAnswers, labFileStore, labFileView, labOutcome, labResultBatch, stateChange } from '../../../shared/contracts/lab.ts';
import { belowEstate, listOf, type Operations } from './operation.ts';

/** The bench of the laboratory. */
export const lab: Operations = belowEstate({
  'get /lab': { does: 'Bags, measures and figures on the bench, and how the figures stand to each other', answer: labBench },
  'post /lab/results': { does: 'Store typed figures as provisional results; may be repeated', body: labResultBatch, answer: z.object({ outcomes: z.array(labOutcome) }) },
  'put /lab/results/state': { does: 'Mark results as provisional, checked or final', body: stateChange, status: 204 },
  'put /lab/results/:resultId/exclusion': { does: 'Leave a result out with a reason, propose it, or take it in again', body: exclusionRequest, answer: z.object({ proposed: z.boolean() }) },
  'get /lab/files': { does: 'Files of laboratories, newest first', answer: listOf(labFileView) },
  'post /lab/files': { does: 'Send one file of a laboratory in the multipart field "files"; stores no result', files: true, answer: labFileView, status: 201 },
  'get /lab/files/:fileId': { does: 'What was understood of a file, what is asked, and what would be stored', answer: labFileView },
  'patch /lab/files/:fileId': { does: 'Answer questions about a file', body: labFileAnswers, answer: labFileView },
  'post /lab/files/:fileId/store': { does: 'Store the results of a file when no question is open', body: labFileStore, answer: labFileView },
  'delete /lab/files/:fileId': { does: 'Put a file aside of which nothing is stored', status: 204 },
  'get /lab/files/:fileId/original': { does: 'The file of a laboratory, byte for byte', type: 'application/octet-stream' },
});
