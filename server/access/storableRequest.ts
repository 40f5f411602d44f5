import type { RequestHandler } from 'express';
import { storableInput } from '../../shared/contracts/storableText.ts';

/** Lists of a field day or a bench: their services refuse item by item, since one bad note must not hold back the rest of a day. */
const byItem = /^\/estates\/[^/]+\/(readings|bags|lab\/results)\/?$/;

/** Refuses text that the database cannot keep before anything is done with it, and names the field. */
export const storableRequest: RequestHandler = (request, _response, next) => {
  storableInput.parse(request.query);
  if (!byItem.test(request.path)) storableInput.parse(request.body);
  next();
};
