import type { PlanView } from '../../shared/contracts/plans.ts';

/** Target vines as GPX 1.1 waypoints in walking order, named as the block counts them. */
export function planGpx(plan: PlanView): string {
  const points = plan.targets.map(({ position: [lon, lat], rowLabel, vineNumber, zone, walkOrder, reserve }) => {
    const name = `${walkOrder ?? ''} R${rowLabel} V${vineNumber}`.trim();
    const note = `Zone ${zone}${reserve ? `; reserve R${reserve.rowLabel} V${reserve.vineNumber}` : ''}`;
    return `  <wpt lat="${lat.toFixed(7)}" lon="${lon.toFixed(7)}"><name>${escaped(name)}</name><desc>${escaped(note)}</desc><type>target vine</type></wpt>`;
  });
  return [
    '<?xml version="1.0" encoding="UTF-8"?>',
    '<gpx version="1.1" creator="Patchrow" xmlns="http://www.topografix.com/GPX/1/1">',
    `  <metadata><name>${escaped(`${plan.blockName}: ${plan.name}`)}</name></metadata>`,
    ...points,
    '</gpx>',
    '',
  ].join('\n');
}

function escaped(text: string): string {
  return text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');
}
