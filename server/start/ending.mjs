import { constants } from 'node:os';
import { sentenceFor } from './messages.mjs';

// Everything must be over within two seconds of a signal; what is left for the database is far more than it needs.
const graceMs = 1000;

const jobs = [];
const children = new Map();
let ending;

export const isEnding = () => ending !== undefined;

/** Runs `job(exitCode)` before this process ends; what was registered last runs first. */
export function atEnd(job) {
  jobs.unshift(job);
}

/** `whenEnding`: 'terminate' the child, 'await' its own end, or 'leave' it to finish alone. */
export function watchChild(child, whenEnding) {
  children.set(child, whenEnding);
  for (const event of ['exit', 'error']) child.once(event, () => children.delete(child));
}

async function endChildren() {
  const watched = [...children].filter(([, whenEnding]) => whenEnding !== 'leave');
  const exits = watched.map(([child]) => new Promise((resolve) => child.once('exit', resolve)));
  for (const [child, whenEnding] of watched) if (whenEnding === 'terminate') child.kill('SIGTERM');
  const patience = setTimeout(() => watched.forEach(([child]) => child.kill('SIGKILL')), graceMs);
  await Promise.all(exits);
  clearTimeout(patience);
}

/** Ends this process once: children first, then the registered jobs. */
export function finish(code) {
  ending ??= (async () => {
    await endChildren();
    let exitCode = code;
    for (const job of jobs) {
      try {
        await job(exitCode);
      } catch (error) {
        console.error(sentenceFor(error));
        exitCode ||= 1;
      }
    }
    process.exit(exitCode);
  })();
  return ending;
}

function refuseOldNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major > 20 || (major === 20 && minor >= 19)) return;
  console.error(`Cupel needs Node.js 20.19 or newer; this is ${process.version}.`);
  process.exit(1);
}

/** Runs a whole script: `job` gives the exit code. */
export async function runScript(job) {
  refuseOldNode();
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
    process.on(signal, () => finish(128 + constants.signals[signal]));
  }
  let code = 1;
  try {
    code = await job();
  } catch (error) {
    if (!isEnding()) console.error(sentenceFor(error));
  }
  await finish(code);
}
