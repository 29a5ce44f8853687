import { existsSync, readdirSync, readFileSync, readlinkSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';

function readOr(fallback, read) {
  try {
    return read();
  } catch {
    return fallback;
  }
}

// Every process of a PostgreSQL server works in its data folder. A number from a file proves nothing: after a reboot or
// a kill it may be somebody else's, and a dead process that nobody has collected yet still has its number.
function worksIn(pid, data) {
  const name = readOr('', () => readFileSync(`/proc/${pid}/comm`, 'utf8')).trim();
  if (name !== 'postgres') return false;
  const folder = readOr('', () => readlinkSync(`/proc/${pid}/cwd`));
  return folder === data || folder === `${data} (deleted)`;
}

/** { pid, port, ready } of the server that runs on `data`, or null. */
export function runningPostmaster(data) {
  const lines = readOr('', () => readFileSync(join(data, 'postmaster.pid'), 'utf8')).split('\n');
  const pid = Number(lines[0]);
  if (!pid || !worksIn(pid, data)) return null;
  return { pid, port: Number(lines[3]), ready: lines[7]?.trim() === 'ready' };
}

/** Waits while the server on `data` is starting or stopping; null once there is none. */
export async function settledPostmaster(data, patienceMs = 60_000) {
  const giveUpAt = Date.now() + patienceMs;
  for (;;) {
    const postmaster = runningPostmaster(data);
    if (!postmaster || postmaster.ready || Date.now() > giveUpAt) return postmaster;
    await pause(50);
  }
}

const processesIn = (data) =>
  readdirSync('/proc').filter((name) => /^\d+$/.test(name) && worksIn(name, data));

/**
 * Ends what a killed server left behind, for it would keep the next one from starting: a busy backend outlives its
 * postmaster. Only for when no postmaster runs; committed work is safe in the write-ahead log.
 */
export async function clearLeftovers(data) {
  const giveUpAt = Date.now() + 10_000;
  for (let left = processesIn(data); left.length > 0 && Date.now() < giveUpAt; left = processesIn(data)) {
    for (const pid of left) readOr(null, () => process.kill(Number(pid), 'SIGKILL'));
    await pause(20);
  }
  if (existsSync(data)) rmSync(join(data, 'postmaster.pid'), { force: true });
}
