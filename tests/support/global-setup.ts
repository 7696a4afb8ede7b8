import { startTestServices, writeServices } from './services.ts';

/** Starts the services where vitest is run by itself; under `npm test` they are there already. */
export async function setup(): Promise<(() => Promise<void>) | undefined> {
  if (process.env.FEEDERWRIGHT_TEST_SERVICES !== undefined) return undefined;
  const { services, stop } = await startTestServices();
  Object.assign(process.env, writeServices(services));
  return stop;
}
