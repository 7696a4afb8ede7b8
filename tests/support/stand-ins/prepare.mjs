/** In place of workers/prepare: leaves one account, as the real one does. */
import { writeFileSync } from 'node:fs';

const accounts = [{ role: 'Reviewer', email: 'reviewer@desk.example', password: 'stand-in' }];
writeFileSync(process.env.FEEDERWRIGHT_DEMO_ACCOUNTS_FILE, JSON.stringify(accounts));
