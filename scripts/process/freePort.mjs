import net from 'node:net';
import { Problem } from '../progress.mjs';

function canListen(port, host) {
  return new Promise((resolve) => {
    const probe = net.createServer();
    probe.once('error', (error) => resolve(error.code === 'EAFNOSUPPORT' || error.code === 'EADDRNOTAVAIL'));
    probe.listen({ port, host, exclusive: true }, () => probe.close(() => resolve(true)));
  });
}

/** True when nobody listens on the port, neither on loopback nor on all addresses. */
export async function isPortFree(port) {
  for (const host of ['127.0.0.1', '0.0.0.0', '::']) {
    if (!(await canListen(port, host))) return false;
  }
  return true;
}

/** The wanted port, or the next free one above it. */
export async function nextFreePort(wanted) {
  for (let port = wanted; port <= Math.min(wanted + 100, 65_535); port++) {
    if (await isPortFree(port)) return port;
  }
  throw new Problem(`No free port from ${wanted} to ${Math.min(wanted + 100, 65_535)}. Set PORT to another number.`);
}

/** A port on loopback that the system picks. */
export function anyFreePort() {
  return new Promise((resolve, reject) => {
    const probe = net.createServer();
    probe.once('error', reject);
    probe.listen({ port: 0, host: '127.0.0.1' }, () => {
      const { port } = probe.address();
      probe.close(() => resolve(port));
    });
  });
}

/** Reads PORT; empty means 3000. */
export function wantedPort(text = process.env.PORT) {
  if (text === undefined || text === '') return 3000;
  const port = Number(text);
  if (Number.isInteger(port) && port >= 1 && port <= 65_535) return port;
  throw new Problem(`PORT is "${text}"; a whole number from 1 to 65535 is needed.`);
}
