/** `stand-in-desk.ts DATA PORT [WORKER]`: the real supervisor and services around programs that do nothing. */
import { runDesk } from '../../server/local/desk.ts';
import { sourcePrograms } from '../../server/local/programs.ts';

const [dataDir = '', port = '', worker = 'worker'] = process.argv.slice(2);
const standIn = (name: string) => ({
  command: process.execPath,
  args: [`tests/support/stand-ins/${name}.mjs`],
});
const code = await runDesk({
  dataDir,
  appPort: Number(port),
  development: false,
  programs: {
    prepare: standIn('prepare'),
    worker: standIn(worker),
    server: standIn('server'),
    mailbox: sourcePrograms().mailbox,
  },
  say: (line) => console.log(line),
});
process.exit(code);
