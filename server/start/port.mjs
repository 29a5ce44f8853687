import { createServer } from 'node:net';
import { setTimeout as pause } from 'node:timers/promises';
import { Failure } from './messages.mjs';

function tryListening(options) {
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once('error', reject);
    server.listen(options, () => {
      const { port } = server.address();
      server.close(() => resolve(port));
    });
  });
}

// A server whose start script was killed a moment ago is still letting its port go.
async function tryForAMoment(port, host) {
  for (const giveUpAt = Date.now() + 2000; ; await pause(100)) {
    try {
      return await tryListening({ port, host });
    } catch (error) {
      if (error.code !== 'EADDRINUSE' || Date.now() > giveUpAt) throw error;
    }
  }
}

/** The port that the server is to use, found free; a sentence when it is not. */
export async function requirePort(wanted = '4600', host = '127.0.0.1') {
  const port = Number(wanted);
  if (!/^\d+$/.test(wanted) || port < 1 || port > 65535) {
    throw new Failure(`PORT must be a whole number from 1 to 65535, not "${wanted}".`);
  }
  try {
    return await tryForAMoment(port, host);
  } catch (error) {
    const another = 'choose another port, for example: PORT=4700 npm start';
    if (error.code === 'EADDRINUSE') {
      throw new Failure(
        `Port ${port} is already in use, perhaps by Cupel itself. Stop the program that uses it, or ${another}`,
      );
    }
    if (error.code === 'EACCES') throw new Failure(`Port ${port} is closed to your user; ${another}`);
    throw error;
  }
}

/** A port of the loopback interface that nobody uses now. */
export const anyFreePort = () => tryListening({ host: '127.0.0.1', port: 0 });
