// A process number alone is not an identity: numbers are handed out again, soon after a restart of a container above
// all. Number and start time together are one. Both are read from Linux's /proc (proc(5), /proc/pid/stat).
import { readFileSync } from 'node:fs';

/** Fields of /proc/<pid>/stat from field 3 on (the name in field 2 may hold spaces), or null when there is no such process. */
function statFields(pid) {
  try {
    const text = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return text.slice(text.lastIndexOf(')') + 2).split(' ');
  } catch {
    return null;
  }
}

/** Identity of a process as plain data, or null when it is gone (or dead and not yet collected). */
export function identify(pid) {
  const fields = statFields(pid);
  return fields === null || fields[0] === 'Z' ? null : { pid, startTicks: fields[19] };
}

/** True while the very process that `identify` described is running. */
export function isAlive(identity) {
  return identity !== null && identify(identity.pid)?.startTicks === identity.startTicks;
}

/** Number of the parent of a process, or null. */
export function parentOf(pid) {
  const fields = statFields(pid);
  return fields === null ? null : Number(fields[1]);
}
