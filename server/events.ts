import type { Logger } from 'pino';
import type { LiveEvent } from '../shared/schemas/events.ts';
import type { RedisSettings } from './config.ts';
import type { LiveEvents } from './context.ts';
import { connectRedis } from './redis.ts';

export interface OpenEvents extends LiveEvents {
  close(): Promise<void>;
}

interface Listener {
  hear(event: LiveEvent): void;
  /** Redis was away: events may have passed unheard. */
  onGap?(): void;
}

/**
 * Over Redis, so that what a worker does is heard by every server. Events are hints, and a Redis that is away never
 * holds up the one who publishes: they are sent when it comes back.
 */
export function openEvents(settings: RedisSettings, log: Logger): OpenEvents {
  const channel = `${settings.prefix}:events`;
  const listeners = new Set<Listener>();
  const publisher = connectRedis(settings, log, 'publishing events');
  // A connection that listens can do nothing else. It subscribes again by itself when Redis comes back.
  const subscriber = connectRedis(settings, log, 'hearing events');
  let wasReady = false;
  subscriber.on('ready', () => {
    if (wasReady) for (const listener of [...listeners]) listener.onGap?.();
    wasReady = true;
  });
  subscriber.subscribe(channel);
  subscriber.on('message', (_channel, text) => {
    const event = JSON.parse(text) as LiveEvent;
    for (const listener of [...listeners]) listener.hear(event);
  });

  return {
    async publish(event) {
      publisher.publish(channel, JSON.stringify(event), (error) => {
        if (error) log.warn({ err: error }, 'An event was not published');
      });
    },
    subscribe(hear, onGap) {
      const listener = { hear, onGap };
      listeners.add(listener);
      return () => void listeners.delete(listener);
    },
    async close() {
      listeners.clear();
      subscriber.end(false);
      if (publisher.connected) await new Promise<void>((done) => publisher.quit(() => done()));
      else publisher.end(false);
    },
  };
}
