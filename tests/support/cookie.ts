import type { Agent } from './server.ts';

/** The session cookie that an agent holds, as a browser would send it. */
export function cookieOf(agent: Agent): string {
  const held = agent.jar.getCookies({ domain: '127.0.0.1', path: '/', secure: false, script: false });
  return (held as unknown as { toValueString(): string }[])[0]!.toValueString();
}
