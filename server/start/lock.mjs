import { createHash } from 'node:crypto';
import { createServer } from 'node:net';
import { setTimeout as pause } from 'node:timers/promises';
import { say } from './messages.mjs';

const held = new Set();

// A name in the kernel's abstract socket space belongs to one process and is free again the moment that process is
// gone, however it went: unlike a lock file it never goes stale.
function claim(address) {
  return new Promise((resolve) => {
    const server = createServer((socket) => socket.destroy());
    server.once('error', () => resolve(null));
    server.listen(address, () => resolve(server.unref()));
  });
}

/** Waits until no other process holds `name`; gives the function that lets it go. Held twice here, it counts once. */
export async function lock(name, whileWaiting) {
  if (held.has(name)) return async () => {};
  const address = `\0cupel-${createHash('sha256').update(name).digest('hex').slice(0, 32)}`;
  let server = await claim(address);
  if (!server && whileWaiting) say(whileWaiting);
  while (!server) {
    await pause(100);
    server = await claim(address);
  }
  held.add(name);
  return async () => {
    held.delete(name);
    await new Promise((resolve) => server.close(resolve));
  };
}

export async function underLock(name, whileWaiting, job) {
  const release = await lock(name, whileWaiting);
  try {
    return await job();
  } finally {
    await release();
  }
}
