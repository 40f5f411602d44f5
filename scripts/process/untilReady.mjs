import http from 'node:http';
import { setTimeout as sleep } from 'node:timers/promises';

/**
 * Asks once and answers with what happened: "ready" for a 2xx status, else words for a message. It has a connection of
 * its own and an end by the clock, so that one that hangs is one try and not the last; nothing of the environment, such
 * as a proxy, stands between.
 */
function askOnce(url, tryMs) {
  return new Promise((resolve) => {
    const request = http.get(url, { agent: false });
    const timer = setTimeout(() => {
      resolve(`no answer within ${tryMs / 1000} s`);
      request.destroy();
    }, tryMs);
    request.once('response', (response) => {
      response.resume();
      resolve(response.statusCode >= 200 && response.statusCode < 300 ? 'ready' : `status ${response.statusCode}`);
    });
    request.on('error', (error) => resolve(error.code ?? error.message));
    request.once('close', () => clearTimeout(timer));
  });
}

/**
 * Waits until an address answers with a 2xx status. Answers null then, or when `isRunning` says that there is nothing to
 * wait for; after `withinMs` a sentence about what was tried. The last try begins when the time is over, since the
 * machine may have slept meanwhile.
 */
export async function waitForAnswer(url, { isRunning, withinMs = 60_000, tryMs = 5_000, pauseMs = 100 }) {
  const begun = Date.now();
  const outcomes = new Map();
  while (isRunning()) {
    const isLast = Date.now() - begun >= withinMs;
    const outcome = await askOnce(url, tryMs);
    if (outcome === 'ready') return null;
    outcomes.set(outcome, (outcomes.get(outcome) ?? 0) + 1);
    if (isLast) return `Asked in ${Math.round((Date.now() - begun) / 1000)} s: ${[...outcomes].map(([what, times]) => `${what} (${times}×)`).join(', ')}.`;
    await sleep(pauseMs);
  }
  return null;
}
