// The lock is a listening socket with an abstract name (unix(7)): only one process can hold it, taking it is one step,
// and the system frees it however the holder ends. A lock file would be left behind by kill -9.
import { createHash } from 'node:crypto';
import net from 'node:net';
import { root } from '../checkout.mjs';
import { say } from '../progress.mjs';

/** Resolves to the listening server that is the lock, or to null while another process holds it. */
function take(address) {
  return new Promise((resolve, reject) => {
    const server = net.createServer();
    server.once('error', (error) => (error.code === 'EADDRINUSE' ? resolve(null) : reject(error)));
    server.listen(address, () => resolve(server.unref()));
  });
}

/** Resolves when the holder lets go: its end closes the connection. */
function untilReleased(address) {
  return new Promise((resolve) => {
    const connection = net.connect(address);
    connection.once('error', () => setTimeout(resolve, 50));
    connection.once('close', resolve);
    connection.resume();
  });
}

/** Runs `action` while no other process of this checkout is inside a lock of the same name. */
export async function withLock(name, action) {
  const address = `\0patchrow-${name}-${createHash('sha256').update(root).digest('hex').slice(0, 16)}`;
  let lock = await take(address);
  if (lock === null) say('Waiting for another Patchrow command in this folder …');
  while (lock === null) {
    await untilReleased(address);
    lock = await take(address);
  }
  const waiting = new Set();
  lock.on('connection', (socket) => { waiting.add(socket); socket.on('error', () => {}); });
  try {
    return await action();
  } finally {
    lock.close();
    for (const socket of waiting) socket.destroy();
  }
}
