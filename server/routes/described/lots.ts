import { alcoholChoice, capacityView, dayCapacity, decisionView, lotChange, lotParts, lotsBoard, newLot, newScenario, newTank, tankChange, tankView, zoneMove } from '../../../shared/contracts/lots.ts';
import { boardAsked, knownOn, ofSeason, ripenessAsked } from '../../../shared/contracts/queries.ts';
import { resultsView, ripeningView } from '../../../shared/contracts/results.ts';
import { newSuggestion } from '../../../shared/contracts/suggestions.ts';
import { belowEstate, listOf, made, type Operations } from './operation.ts';

/** Ripeness, pick lots, what-ifs and tanks. */
export const lots: Operations = belowEstate({
  'get /zonings/:zoningId/results': { does: 'Means by zone, measure and day, with ranges and how many readings are missing', query: ofSeason, answer: resultsView },
  'get /blocks/:blockId/ripening': { does: 'Series by zone with change, trend and forecast', query: ripenessAsked, answer: ripeningView },
  'get /lots': { does: 'Lots of a scenario, zones with what is free, tanks', query: boardAsked, answer: lotsBoard },
  'post /lots': { does: 'Make a pick lot', body: newLot, answer: made, status: 201 },
  'patch /lots/:lotId': { does: 'Change name, wine, date or tank of a lot', conditional: true, body: lotChange, status: 204 },
  'put /lots/:lotId/parts': { does: 'Set the zones of a lot, whole or by rows', conditional: true, body: lotParts, status: 204 },
  'post /lot-moves': { does: 'Move what a zone has from one lot to another, both or none', body: zoneMove, status: 204 },
  'post /lots/:lotId/confirm': { does: 'Confirm a lot and its date', conditional: true, status: 204 },
  'delete /lots/:lotId': { does: 'Delete a draft lot; its zones are free again', conditional: true, status: 204 },
  'post /scenarios': { does: 'Copy the lots as a what-if', body: newScenario, answer: made, status: 201 },
  'post /scenarios/:scenarioId/apply': { does: 'Put a what-if in force; the lots in force are kept as one', answer: made },
  'delete /scenarios/:scenarioId': { does: 'Delete a what-if', status: 204 },
  'post /lot-suggestions': { does: 'Suggest lots that are alike inside and fit tanks and days; a what-if, applied by nobody but a person', body: newSuggestion, answer: made, status: 201 },
  'get /lots/:lotId/decisions': { does: 'What was decided about a lot, and what was known then', answer: listOf(decisionView) },
  'get /day-capacities': { does: 'What can be picked and pressed by day', query: knownOn, answer: listOf(capacityView) },
  'put /day-capacities': { does: 'Set what can be picked and pressed on a day', body: dayCapacity, status: 204 },
  'put /alcohol-method': { does: 'Choose how potential alcohol is calculated where a lot does not say', body: alcoholChoice, status: 204 },
  'get /tanks': { does: 'Tanks', answer: listOf(tankView) },
  'post /tanks': { does: 'Add a tank', body: newTank, answer: made, status: 201 },
  'patch /tanks/:tankId': { does: 'Change a tank', body: tankChange, status: 204 },
  'delete /tanks/:tankId': { does: 'Take a tank out of use', status: 204 },
});
