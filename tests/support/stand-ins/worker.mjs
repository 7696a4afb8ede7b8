/** In place of workers/start: says when it began and ended, and with what environment. */
import { appendFileSync } from 'node:fs';
import { join } from 'node:path';

const diary = join(process.env.FEEDERWRIGHT_FILES_DIR, '..', 'diary.txt');
appendFileSync(diary, `worker began ${process.pid} ${process.env.TZ}\n`);
process.once('SIGTERM', () => {
  appendFileSync(diary, 'worker ended\n');
  process.exit(0);
});
setInterval(() => undefined, 1000);
