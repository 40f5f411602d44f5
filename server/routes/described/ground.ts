import { z } from 'zod';
import { blockChange, blockLine, blockView, changedBlock, newBlock, outlineCheck, outlineToCheck } from '../../../shared/contracts/blocks.ts';
import { jobView } from '../../../shared/contracts/jobs.ts';
import { asideReading, blockLayerView, cleaningChange, layerBeside, layerChange, overrideChange, reliefView } from '../../../shared/contracts/layers.ts';
import { measureChange, measureView, newMeasure } from '../../../shared/contracts/measures.ts';
import { ofBlock, oneBlock } from '../../../shared/contracts/queries.ts';
import { newRestriction, pickIntervalChange, restrictionLift, restrictionView } from '../../../shared/contracts/restrictions.ts';
import { blockRows, censusChange, censusOutcome, numberingChange } from '../../../shared/contracts/rows.ts';
import { searchAnswer, searchQuery } from '../../../shared/contracts/search.ts';
import { todayView } from '../../../shared/contracts/today.ts';
import { weatherDay, weatherFile, weatherReading, weatherView } from '../../../shared/contracts/weather.ts';
import { belowEstate, listOf, made, type Operations } from './operation.ts';

/** Blocks, rows, layers, measures, restrictions, weather, and what is asked across all of them. */
export const ground: Operations = belowEstate({
  'get /blocks': { does: 'Blocks with area, vines, zones in force, next round and restriction', answer: listOf(blockLine) },
  'post /blocks': { does: 'Make a block from its outline and facts; its rows are laid', body: newBlock, answer: changedBlock, status: 201 },
  'post /blocks/check': { does: 'What an outline would come to; saves nothing', body: outlineToCheck, answer: outlineCheck },
  'get /blocks/:blockId': { does: 'A block, with its version as ETag', answer: blockView },
  'patch /blocks/:blockId': { does: 'Change facts or outline', conditional: true, body: blockChange, answer: changedBlock },
  'delete /blocks/:blockId': { does: 'Take a block out of use', conditional: true, status: 204 },
  'get /blocks/:blockId/rows': { does: 'Rows with pieces, numbers and known vines', answer: blockRows },
  'put /blocks/:blockId/rows': { does: 'Number rows and vines anew', conditional: true, body: numberingChange, answer: blockRows },
  'put /blocks/:blockId/vines': { does: 'Mark vines as missing, dead, replant, off-type or sick', body: censusChange, answer: censusOutcome },
  'get /blocks/:blockId/layers': { does: 'Layers of a block with statistics and findings', answer: listOf(blockLayerView) },
  'get /relief': { does: 'Heights of the land round all blocks, for maps', answer: reliefView.nullable() },
  'get /layers/:layerId/cells': { does: 'Cells of a layer on a block, bytes; the grid is in the header x-grid', query: oneBlock, type: 'application/octet-stream' },
  'get /layers/:layerId/marks': { does: 'Cells that the findings of a layer speak of, a byte a cell; 204 when there are none', query: oneBlock, type: 'application/octet-stream' },
  'patch /layers/:layerId': { does: 'Change name, unit, day or legend of a layer', body: layerChange, status: 204 },
  'get /layers/:layerId/aside': { does: 'Readings that were set aside on a block, with place and reason', query: oneBlock, answer: listOf(asideReading) },
  'get /layers/:layerId/beside': { does: 'The other layers on a block: how alike they are, and how far those of its kind lie off', query: oneBlock, answer: listOf(layerBeside) },
  'put /layers/:layerId/cleaning': { does: 'Take reasons for setting readings aside back; the layer is made anew', body: cleaningChange, answer: z.object({ jobId: z.uuid() }), status: 202 },
  'post /layers/:layerId/override': { does: 'Use a layer in spite of red findings, with a reason', body: overrideChange, status: 204 },
  'delete /layers/:layerId': { does: 'Take a layer out of use', status: 204 },
  'get /measures': { does: 'What the estate measures, how precisely and how surely', answer: listOf(measureView) },
  'post /measures': { does: "Add a measure of the estate's own", body: newMeasure, answer: measureView, status: 201 },
  'patch /measures/:measureId': { does: 'Change margin, confidence, spread or limits of a measure', body: measureChange, answer: measureView },
  'get /restrictions': { does: 'Entry restrictions as recorded, and who may lift one early. None recorded does not say that it is safe to enter', query: ofBlock, answer: listOf(restrictionView).extend({ lifters: z.unknown() }) },
  'post /restrictions': { does: 'Record an entry restriction as it stands on the label', body: newRestriction, answer: made, status: 201 },
  'post /restrictions/:restrictionId/lift': { does: 'Lift a restriction early, with a reason', body: restrictionLift, status: 204 },
  'post /restrictions/:restrictionId/pick-interval': { does: 'Change the pre-harvest interval of a record, with a reason', body: pickIntervalChange, status: 204 },
  'get /weather': { does: 'Temperatures and rain by day, with the heat of the season', answer: weatherView },
  'put /weather': { does: 'Keep the weather of a day', body: weatherDay, status: 204 },
  'delete /weather/:day': { does: 'Take a day out', status: 204 },
  'post /weather/import': { does: "Read a station's table back; with apply, keep all of it", body: weatherFile, answer: weatherReading },
  'get /today': { does: 'What waits for the person today', answer: todayView },
  'get /search': { does: 'Things whose name answers', query: searchQuery, answer: searchAnswer },
  'get /jobs/:jobId': { does: 'Progress of a job', answer: jobView },
  'delete /jobs/:jobId': { does: 'Call a job off', answer: jobView },
  'get /jobs/:jobId/events': { does: 'Progress of a job as server-sent events', type: 'text/event-stream' },
});
