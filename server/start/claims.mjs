import { mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

// A process is its number and the moment it began; the number alone comes round again.
function identity(pid) {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
    return fields[0] === 'Z' ? null : `${pid}-${fields[19]}`;
  } catch {
    return null;
  }
}

/** Notes in `folder` that this process uses the cluster. */
export function claim(folder) {
  mkdirSync(folder, { recursive: true });
  writeFileSync(join(folder, identity(process.pid)), '');
}

/** Takes the note away; true when no other living process uses the cluster. */
export function giveUp(folder) {
  rmSync(join(folder, identity(process.pid)), { force: true });
  let alone = true;
  for (const name of readdirSync(folder)) {
    if (identity(name.split('-')[0]) === name) alone = false;
    else rmSync(join(folder, name), { force: true });
  }
  return alone;
}
