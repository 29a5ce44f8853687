import { existsSync } from 'node:fs';
import { installFromDebian } from './apt.mjs';
import { Failure } from './messages.mjs';

/** The browser for the browser tests, installed first when it is missing. */
export async function provideChromium() {
  const program = process.env.CHROMIUM || '/usr/bin/chromium';
  if (!existsSync(program)) await installFromDebian('Chromium', ['chromium']);
  if (!existsSync(program))
    throw new Failure(`The browser ${program} is not there; CHROMIUM names another one.`);
  return program;
}
