/**
 * npm run bench -- [--verdict [--layers 1 | 3] | --zones] [--count N] [--seed N]   quality on simulated blocks, a line of JSON a row
 * npm run bench -- --ripening [--count N] [--seed N]                  do forecasts hold as they say, how often is noise called a change
 * npm run bench -- --sync [--count N] [--seed N]                       field days in random orders: lost and doubled readings
 * npm run bench -- --coverage [--count N] [--seed N]                   what stopping early keeps of its promise; N seasons a setting
 * npm run bench -- --import [--runs N] [--data FOLDER]                 seconds and memory of reading pictures, beside GDAL
 * npm run bench -- --requests http://localhost:3000 [--count SECONDS]  how fast a running server answers while it zones
 * npm run bench -- --phone http://localhost:3000 [--runs N]          the crew's first screen over a slow line, and later without one
 * npm run bench -- --plan [--runs N]                                  CPU milliseconds of a plan on ten hectares
 * npm run bench -- [--runs N] [--cell METRES] [--data FOLDER] [--against 'COMMAND {data} {out} {cell}'] …   speed, as JSON
 */

import { parseArgs } from 'node:util';
import { benchImport } from './benchImport.ts';
import { benchPhone } from './benchPhone.ts';
import { benchPipeline } from './benchPipeline.ts';
import { benchPlan } from './benchPlan.ts';
import { benchRequests } from './benchRequests.ts';
import { benchSync } from './benchSync.ts';
import { benchVerdict } from './benchVerdict.ts';
import { benchZones } from './benchZones.ts';
import { runCoverage } from './coverage.ts';
import { runRipening } from './ripening.ts';

const { values } = parseArgs({
  options: {
    verdict: { type: 'boolean', default: false },
    ripening: { type: 'boolean', default: false },
    zones: { type: 'boolean', default: false },
    sync: { type: 'boolean', default: false },
    coverage: { type: 'boolean', default: false },
    import: { type: 'boolean', default: false },
    plan: { type: 'boolean', default: false },
    requests: { type: 'string' },
    phone: { type: 'string' },
    layers: { type: 'string', default: '2' },
    count: { type: 'string' },
    seed: { type: 'string', default: '1000' },
    runs: { type: 'string', default: '3' },
    cell: { type: 'string', default: '2' },
    data: { type: 'string' },
    against: { type: 'string', multiple: true },
  },
});

const print = (value: unknown) => process.stdout.write(`${JSON.stringify(value, (_, each: unknown) => (typeof each === 'number' && !Number.isInteger(each) ? Number(each.toPrecision(4)) : each))}\n`);
const seed = Number(values.seed);

if (values.requests !== undefined) for await (const row of benchRequests(values.requests, Number(values.count ?? 20))) print(row);
else if (values.phone !== undefined) for (const row of await benchPhone(values.phone, Number(values.runs))) print(row);
else if (values.verdict) for (const row of benchVerdict(Number(values.count ?? 200), seed, values.layers === '1' ? 1 : values.layers === '3' ? 3 : 2)) print(row);
else if (values.zones) for (const row of benchZones(Number(values.count ?? 60), seed)) print(row);
else if (values.sync) for (const row of benchSync(Number(values.count ?? 300), seed)) print(row);
else if (values.coverage) for (const row of coverageRows(Number(values.count ?? 2000))) print(row);
else if (values.ripening) for (const row of ripeningRows(Number(values.count ?? 2000))) print(row);
else if (values.import) for (const row of await benchImport({ runs: Number(values.runs), cellSizeM: Number(values.cell), dataFolder: values.data ?? null })) print(row);
else if (values.plan) for (const row of benchPlan(Number(values.runs))) print(row);
else print(await benchPipeline({ runs: Number(values.runs), cellSizeM: Number(values.cell), dataFolder: values.data ?? null, against: values.against ?? [] }));

/** Every setting, then the groups. */
function coverageRows(seasons: number): object[] {
  const { settings, summary } = runCoverage({ seasons, seed });
  return [...settings, ...summary];
}

function ripeningRows(seasons: number): object[] {
  const { forecast, falseAlarms, backTest, bend } = runRipening({ seasons, seed });
  return [...forecast, ...falseAlarms, ...backTest, ...bend];
}
