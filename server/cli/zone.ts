import { runZoneCommand } from './zoneCommand.ts';

/** Entry of `npm run zone`: what it does is in zoneCommand.ts. */
export async function main(args: readonly string[]): Promise<void> {
  const { exitCode, line } = await runZoneCommand(args);
  (exitCode === 0 ? process.stdout : process.stderr).write(`${line}\n`);
  process.exitCode = exitCode;
}
