import { spawn, type ChildProcess, type SpawnOptions } from 'node:child_process';
import { chmodSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { onTestFinished } from 'vitest';

export const root = fileURLToPath(new URL('../..', import.meta.url));

/** A folder that every user may enter, gone after the test. */
export function temporaryFolder(): string {
  const folder = mkdtempSync(join(tmpdir(), 'cupel-start-'));
  chmodSync(folder, 0o755);
  onTestFinished(() => rmSync(folder, { recursive: true, force: true }));
  return folder;
}

// The scripts must see the environment of a person's shell, not that of the test run around them.
function plainEnvironment(): NodeJS.ProcessEnv {
  const foreign = /^(VITEST.*|NODE_ENV|TEST|PORT|DATABASE_URL|CUPEL_.*|TEST_DATABASE_URL)$/;
  return Object.fromEntries(Object.entries(process.env).filter(([name]) => !foreign.test(name)));
}

export interface Running {
  child: ChildProcess;
  pid: number;
  /** What was printed until now, both streams in their order of arrival. */
  printed: () => string;
  /** The exit code, or the signal that ended it. */
  ended: Promise<number | string>;
}

export function runProgram(
  args: string[],
  env: NodeJS.ProcessEnv = {},
  options: SpawnOptions = {},
  program = process.execPath,
): Running {
  const child = spawn(program, args, {
    cwd: root,
    env: { ...plainEnvironment(), ...env },
    stdio: 'pipe',
    ...options,
  });
  let printed = '';
  child.stdout?.on('data', (text) => (printed += text));
  child.stderr?.on('data', (text) => (printed += text));
  const ended = new Promise<number | string>((resolve) => {
    child.once('close', (code, signal) => resolve(code ?? signal ?? 'unknown'));
  });
  onTestFinished(async () => {
    child.kill('SIGTERM');
    await ended;
  });
  return { child, pid: child.pid!, printed: () => printed, ended };
}

/** True while a process runs; one that has ended and waits to be collected does not. */
export function isAlive(pid: number): boolean {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return stat[stat.lastIndexOf(')') + 2] !== 'Z';
  } catch {
    return false;
  }
}

/** Processes that a process started and that still run. */
export function readChildren(pid: number): number[] {
  const text = readFileSync(`/proc/${pid}/task/${pid}/children`, 'utf8').trim();
  return text === '' ? [] : text.split(' ').map(Number);
}
