import { z } from 'zod';
import { id } from '../../../shared/contracts/common.ts';
import { cellarResultView, factorSwitch, factorView, newCellarResult } from '../../../shared/contracts/factors.ts';
import { newNotice, noticeState, noticeView } from '../../../shared/contracts/notices.ts';
import { role } from '../../../shared/contracts/people.ts';
import { knownOn, letterPaper } from '../../../shared/contracts/queries.ts';
import { newTicket, reviewView, ticketFile, ticketReading, ticketView } from '../../../shared/contracts/tickets.ts';
import { belowEstate, listOf, made, type Operations } from './operation.ts';

const open: Operations = {
  'get /notice-state/:code': { does: 'Whether a pick notice on paper still holds; open to whoever has the paper', answer: noticeState },
};

/** Pick notices, scale tickets, factors and the review. */
export const harvest: Operations = {
  ...open,
  ...belowEstate({
    'get /notices': { does: 'Pick notices, newest first', query: knownOn, answer: listOf(noticeView) },
    'get /notice-people': { does: 'People a pick notice can be sent to', answer: listOf(z.object({ id, name: z.string(), roles: z.array(role) })) },
    'post /lots/:lotId/reopen': { does: 'Make a confirmed lot a draft again; its notice is void from then on', conditional: true, status: 204 },
    'post /lots/:lotId/notices': { does: 'Send the next pick notice of a confirmed lot', body: newNotice, answer: made.extend({ number: z.int() }), status: 201 },
    'post /notices/:noticeId/read': { does: 'Note that a notice was read', status: 204 },
    'get /notices/:noticeId/sheet': { does: 'A pick notice on paper', type: 'application/pdf' },
    'get /tickets': { does: 'Scale tickets with what corrects them', answer: listOf(ticketView) },
    'post /tickets': { does: 'Enter a scale ticket, or one that corrects another', body: newTicket, answer: made, status: 201 },
    'post /tickets/import': { does: 'Read a table of scale tickets back; with apply, keep all of it', body: ticketFile, answer: ticketReading },
    'get /cellar-results': { does: 'What the cellar measured of a lot', answer: listOf(cellarResultView) },
    'post /lots/:lotId/cellar-results': { does: 'Enter litres or a figure of a lot in the cellar', body: newCellarResult, answer: made, status: 201 },
    'get /factors': { does: 'Factors learned from tickets, with n and spread, and whether they are switched on', answer: listOf(factorView) },
    'put /factors': { does: 'Switch a learned factor on or off', body: factorSwitch, status: 204 },
    'get /blocks/:blockId/season-letter': { does: "Half a page on a block's season", query: letterPaper, type: 'application/pdf' },
    'get /review': { does: 'Forecast against scale, and whether zones mattered', answer: reviewView },
  }),
};
