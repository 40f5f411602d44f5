import { z } from 'zod';
import { openSession, passwordChange, resetAnswer, resetRequest } from '../../../shared/contracts/account.ts';
import { estateChange, estateFacts, newEstate, seasonChange } from '../../../shared/contracts/estate.ts';
import { invitationAnswer, invitationOffer, invitationView, newInvitation, personView, rolesChange } from '../../../shared/contracts/people.ts';
import { crewCodeMade, crewCodeState, crewCodeTyped, crewOffer, crewSignIn, lossReport, newCrewPerson, newPin, phoneAnswer, phoneState, phoneView } from '../../../shared/contracts/phones.ts';
import { auditPage, auditQuery, mailLine } from '../../../shared/contracts/records.ts';
import { credentials, personChange, session, sessionEstate } from '../../../shared/contracts/session.ts';
import { exportFormatLine } from '../../../shared/contracts/zonings.ts';
import { belowEstate, listOf, made, type Operations } from './operation.ts';

const open: Operations = {
  'get /session': { does: 'Who is signed in, in which estates, with which reach', answer: session },
  'post /session': { does: 'Sign in', body: credentials, answer: session },
  'delete /session': { does: 'Sign out', status: 204 },
  'patch /session/person': { does: 'Change own name, language, units or theme', body: personChange, answer: session },
  'get /invitations/:token': { does: 'What an invitation offers, and whether its person is known already', answer: invitationOffer },
  'post /invitations/accept': { does: 'Join an estate with an invitation', body: invitationAnswer, answer: session, status: 201 },
  'get /account/sessions': { does: 'Where one is signed in', answer: listOf(openSession) },
  'delete /account/sessions': { does: 'End all other sessions', answer: z.object({ ended: z.int() }) },
  'delete /account/sessions/:key': { does: 'End one session', status: 204 },
  'put /account/password': { does: 'Set a new password with the old one; other sessions end', body: passwordChange, answer: z.object({ ended: z.int() }) },
  'post /password-resets': { does: 'Ask for a link that sets a new password; the answer is always the same', body: resetRequest, answer: z.object({ asked: z.literal(true) }), status: 202 },
  'get /password-resets/:token': { does: 'Whose password a link sets', answer: z.object({ email: z.string() }) },
  'post /password-resets/use': { does: 'Set a new password with a link, once', body: resetAnswer, status: 204 },
  'post /crew/people': { does: 'People who may sign in on a shared phone with this crew code', body: crewCodeTyped, answer: crewOffer },
  'post /crew/session': { does: 'Sign in on a shared phone with crew code, name and PIN', body: crewSignIn, answer: session },
  'get /estates': { does: 'Estates of the person', answer: listOf(sessionEstate) },
  'post /estates': { does: 'Make an estate', body: newEstate, answer: made, status: 201 },
  'get /formats': { does: 'Formats that zones can be exported in', answer: listOf(exportFormatLine) },
};

/** Signing in, the own account, estates and their people. */
export const account: Operations = {
  ...open,
  ...belowEstate({
    'get ': { does: 'An estate as its people see it', answer: sessionEstate },
    'get /facts': { does: 'What the estate says of itself, its settings, and backups', answer: estateFacts },
    'patch ': { does: 'Change an estate', body: estateChange, status: 204 },
    'patch /seasons/:seasonId': { does: 'Move the phases of a season', body: seasonChange, status: 204 },
    'get /people': { does: 'People with their roles', answer: listOf(personView) },
    'put /people/:personId/roles': { does: 'Set the roles of a person', body: rolesChange, status: 204 },
    'get /invitations': { does: 'Invitations and whether they were taken', answer: listOf(invitationView) },
    'post /invitations': { does: 'Invite a person', body: newInvitation, answer: made, status: 201 },
    'post /invitations/:invitationId/resend': { does: 'Send an invitation once more, with a new link', status: 204 },
    'delete /invitations/:invitationId': { does: 'Take an invitation back', status: 204 },
    'get /audit': { does: 'What was done, newest first', query: auditQuery, answer: auditPage },
    'get /mail': { does: 'Mail that was written, and whether it left', answer: listOf(mailLine) },
    'get /crew-code': { does: 'Whether a crew code stands, and until when', answer: crewCodeState },
    'post /crew-code': { does: 'Make a crew code; the one before ends', answer: crewCodeMade, status: 201 },
    'delete /crew-code': { does: 'End the crew code', status: 204 },
    'post /crew': { does: 'Add a person who signs in on shared phones only', body: newCrewPerson, answer: made, status: 201 },
    'put /crew/:personId/pin': { does: 'Set the PIN of a person', body: newPin, status: 204 },
    'get /phones': { does: 'Phones, when they were last heard of, and what waits on them', answer: listOf(phoneView) },
    'post /phones/check-in': { does: 'How a phone stands; answers whether it was reported lost', body: phoneState, answer: phoneAnswer },
    'put /phones/:phoneId/loss': { does: 'Report a phone lost, or found again: it is signed out at its next contact', body: lossReport, status: 204 },
  }),
};
