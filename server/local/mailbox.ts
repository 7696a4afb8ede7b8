/** The local mailbox as a process of its own: `mailbox.js DIRECTORY PORT`. */
import { startMailboxServer } from './mailbox-server.ts';

const [dir, port] = process.argv.slice(2);
if (dir === undefined || !/^\d+$/.test(port ?? '')) {
  throw new Error(`Got "${process.argv.slice(2).join(' ')}", expected: DIRECTORY PORT`);
}
const server = await startMailboxServer(dir, Number(port));
process.once('SIGTERM', () => {
  void server.stop().then(() => process.exit(0));
});
