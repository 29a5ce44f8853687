import { spawn } from 'node:child_process';
import { isEnding, watchChild } from './ending.mjs';
import { projectRoot } from './project.mjs';

const forever = new Promise(() => {});

/**
 * Runs a program to its end and gives { code, output }; never a shell, never a throw for a failed program.
 * `output`: 'show' it, 'keep' it, or a file descriptor to write it to. `whenEnding`: see watchChild; a program
 * that the ending itself needs says 'await', any other is not started any more by then.
 */
export function run(command, args, options = {}) {
  const { output = 'keep', input, whenEnding = 'terminate', ...rest } = options;
  if (isEnding() && whenEnding !== 'await') return forever;
  const sink = output === 'show' ? 'inherit' : output === 'keep' ? 'pipe' : output;
  const stdin = output === 'show' ? 'inherit' : input === undefined ? 'ignore' : 'pipe';
  return new Promise((resolve) => {
    let kept = '';
    const child = spawn(command, args, { ...rest, stdio: [stdin, sink, sink] });
    watchChild(child, whenEnding);
    for (const stream of [child.stdout, child.stderr]) stream?.on('data', (text) => (kept += text));
    // A program that ends without reading its input is judged by its exit code, not by the broken pipe.
    child.stdin?.on('error', () => {});
    child.stdin?.end(input);
    child.once('error', (error) => resolve({ code: 127, output: error.message }));
    child.once('close', (code, signal) => resolve({ code: code ?? 1, signal, output: kept }));
  });
}

/**
 * Runs a Node.js program of the project, its output shown. It gets exactly one signal to end: it has a session of its own,
 * which Ctrl-C does not reach, and is told by us, or by the end of us, however that came.
 */
export function runNode(args, env) {
  if (isEnding()) return forever;
  const preload = new URL('./end-with-parent.mjs', import.meta.url).href;
  return new Promise((resolve) => {
    const child = spawn(process.execPath, ['--import', preload, ...args], {
      cwd: projectRoot,
      detached: true,
      env: { ...env, CUPEL_START_PID: String(process.pid) },
      stdio: ['inherit', 'inherit', 'inherit', 'ipc'],
    });
    watchChild(child, 'terminate');
    child.once('exit', (code, signal) => resolve({ code: code ?? 1, signal }));
  });
}
