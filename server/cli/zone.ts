import { runZoneCommand } from './zoneCommand.ts';

/** Entry of `npm run zone`: what it does is in zoneCommand.ts. */

const { exitCode, line } = await runZoneCommand(process.argv.slice(2));
(exitCode === 0 ? process.stdout : process.stderr).write(`${line}\n`);
process.exitCode = exitCode;
