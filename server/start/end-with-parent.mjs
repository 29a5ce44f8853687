// Loaded before the server and the test runner. Without it a start script that was killed outright would leave a
// server behind that holds the port. Their own child processes and threads inherit this file but not the parent.
import { isMainThread } from 'node:worker_threads';

if (isMainThread && process.connected && process.ppid === Number(process.env.CUPEL_START_PID)) {
  process.once('disconnect', () => process.kill(process.pid, 'SIGTERM'));
  process.channel.unref();
}
