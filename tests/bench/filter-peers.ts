import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const peers = fileURLToPath(new URL('../../../shared/peers/', import.meta.url));

/** What a peer prints, one JSON line a job. */
export type PeerLine = {
  peer: string;
  job: string;
  ms: number;
  sumZ: number;
  lastZ: number;
  logLikelihood?: number;
};
/** Both jobs of a peer; null where it is missing. */
export type Peer = { filter: PeerLine; observer: PeerLine } | null;

function linesOf(stdout: string): Peer {
  const lines = stdout
    .trim()
    .split('\n')
    .map((line) => JSON.parse(line) as PeerLine);
  const find = (job: string) => lines.find((line) => line.job === job)!;
  return { filter: find('kalman filter'), observer: find('fixed-gain observer') };
}

/** Compiles the C peer; null where there is no compiler or no peer. */
export function compiledPeer(folder: string): (() => Peer) | null {
  const source = join(peers, 'kf_limit.c');
  if (!existsSync(source)) return null;
  const binary = join(folder, 'kf_limit');
  const made = spawnSync('cc', ['-O3', '-march=native', source, '-lm', '-o', binary]);
  if (made.status !== 0) return null;
  return () => linesOf(spawnSync(binary, { encoding: 'utf8' }).stdout);
}

/** Runs the statsmodels peer where a Python has it. */
export function statsmodelsPeer(): Peer {
  const script = join(peers, 'kf_statsmodels.py');
  if (!existsSync(script)) return null;
  for (const python of ['python3', '/usr/bin/python3']) {
    if (spawnSync(python, ['-c', 'import statsmodels']).status !== 0) continue;
    const run = spawnSync(python, [script], { encoding: 'utf8' });
    if (run.status === 0) return linesOf(run.stdout);
  }
  return null;
}

/** The shorter time of each job. */
export function fastest(a: Peer, b: Peer): Peer {
  if (!a || !b) return a ?? b;
  const quicker = (one: PeerLine, two: PeerLine) => (one.ms <= two.ms ? one : two);
  return { filter: quicker(a.filter, b.filter), observer: quicker(a.observer, b.observer) };
}
