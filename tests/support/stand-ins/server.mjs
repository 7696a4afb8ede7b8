/** In place of server/start: answers 200 and keeps a diary of its begin and end. */
import { appendFileSync } from 'node:fs';
import { createServer } from 'node:http';
import { join } from 'node:path';

const diary = join(process.env.FEEDERWRIGHT_FILES_DIR, '..', 'diary.txt');
appendFileSync(diary, `server began ${process.pid}\n`);
const server = createServer((_request, response) => response.end('stand-in'));
server.listen(Number(process.env.FEEDERWRIGHT_PORT), '127.0.0.1');
process.once('SIGTERM', () => {
  appendFileSync(diary, 'server ended\n');
  process.exit(0);
});
