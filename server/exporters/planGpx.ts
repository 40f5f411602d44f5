import type { PlanView } from '../../shared/contracts/plans.ts';
import { latLonText } from '../../shared/geo/latLonText.ts';
import { xmlText } from './features/xmlText.ts';
import { sheetTexts, type SheetLanguage } from './sheetTexts.ts';
import { vineMark } from './vineMark.ts';

/** Target vines as GPX 1.1 waypoints in walking order, named as the block counts them; without rows by their place numbers, the reserve by its coordinates; what is said of them is in the reader's language. */
export function planGpx(plan: PlanView, language: string): string {
  const texts = sheetTexts[language in sheetTexts ? (language as SheetLanguage) : 'en'];
  const zones = new Map(plan.basis.zones.map(({ number, name }) => [number, name && name !== `Zone ${number}` ? `${number}, ${name}` : String(number)]));
  const points = plan.targets.map((target) => {
    const { position: [lon, lat], zone, walkOrder, reserve } = target;
    const name = `${walkOrder ?? ''} ${vineMark(target)}`.trim();
    const note = `${texts.zone} ${zones.get(zone) ?? zone}${reserve ? `; ${texts.reserve.toLowerCase()} ${reserve.place ? latLonText(reserve.place) : vineMark(reserve)}` : ''}`;
    return `  <wpt lat="${lat.toFixed(7)}" lon="${lon.toFixed(7)}"><name>${xmlText(name)}</name><desc>${xmlText(note)}</desc><type>target vine</type></wpt>`;
  });
  return [
    '<?xml version="1.0" encoding="UTF-8"?>',
    '<gpx version="1.1" creator="Patchrow" xmlns="http://www.topografix.com/GPX/1/1">',
    `  <metadata><name>${xmlText(`${plan.blockName}: ${plan.name}`)}</name></metadata>`,
    ...points,
    '</gpx>',
    '',
  ].join('\n');
}
