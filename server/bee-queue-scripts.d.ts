/* A part of bee-queue that it does not speak of: it calls its Lua scripts by hash, and a new Redis knows none of them. */

declare module 'bee-queue/lib/lua/index.js' {
  import type { RedisClient } from 'redis';

  const scripts: { buildCache(client: RedisClient): Promise<unknown> };
  export default scripts;
}
