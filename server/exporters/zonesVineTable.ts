import { tableText, type TableCell } from './tableText.ts';
import type { ZoneExport } from './zoneExport.ts';
import { vineFeatures } from './zoneFeatures.ts';

/** How surely each vine belongs to its zone and where it stands, one line a vine, as a spreadsheet of the reader's language opens it. */
export function zonesVineTable(input: Pick<ZoneExport, 'blockName' | 'madeAt' | 'vines' | 'language'>): Buffer {
  const { fields, features } = vineFeatures(input);
  const lines = features.map(({ values }, line) => {
    const [longitude, latitude] = input.vines[line]!.at;
    const cells = fields.map(({ name, decimals }, at): [string, TableCell] => {
      const value = values[at] ?? null;
      return [name, typeof value === 'number' && decimals !== undefined ? { value, decimals } : value];
    });
    return { ...Object.fromEntries(cells), longitude: { value: longitude, decimals: 7 }, latitude: { value: latitude, decimals: 7 } };
  });
  return Buffer.from(tableText([...fields.map(({ name }) => name), 'longitude', 'latitude'], lines, input.language), 'utf8');
}
