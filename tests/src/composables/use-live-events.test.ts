// @vitest-environment happy-dom
import { QueryClient, VueQueryPlugin } from '@tanstack/vue-query';
import { mount } from '@vue/test-utils';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { defineComponent, h } from 'vue';
import type { LiveEvent } from '../../../shared/schemas/events.ts';
import { useLiveEvents, usePollingInterval } from '../../../src/composables/useLiveEvents.ts';

/** Stands for the browser's stream: the test decides when it opens, speaks and breaks. */
class StreamStandIn extends EventTarget {
  static readonly CLOSED = 2;
  static opened: StreamStandIn[] = [];
  readyState = 0;
  constructor() {
    super();
    StreamStandIn.opened.push(this);
  }
  close() {
    this.readyState = StreamStandIn.CLOSED;
  }
  say(event: LiveEvent) {
    this.dispatchEvent(new MessageEvent('change', { data: JSON.stringify(event) }));
  }
  breakOff(forGood: boolean) {
    this.readyState = forGood ? StreamStandIn.CLOSED : 0;
    this.dispatchEvent(new Event('error'));
  }
}

const change: LiveEvent = { kind: 'run', id: 'r1', applicationId: 'a1', version: 2 };
const stream = () => StreamStandIn.opened.at(-1)!;

function mountListener(heard: LiveEvent[] = [], active = () => true) {
  const queryClient = new QueryClient();
  const invalidate = vi.spyOn(queryClient, 'invalidateQueries');
  const component = defineComponent({
    setup() {
      useLiveEvents((event) => heard.push(event));
      const interval = usePollingInterval(active, 1000);
      return () => h('p', String(interval.value));
    },
  });
  const wrapper = mount(component, { global: { plugins: [[VueQueryPlugin, { queryClient }]] } });
  return { wrapper, invalidate };
}

beforeEach(() => {
  StreamStandIn.opened = [];
  vi.stubGlobal('EventSource', StreamStandIn);
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
  vi.unstubAllGlobals();
});

describe('live events', () => {
  it('share one stream between all listeners of a tab, and close it with the last', () => {
    const first = mountListener();
    const second = mountListener();
    expect(StreamStandIn.opened).toHaveLength(1);
    first.wrapper.unmount();
    expect(stream().readyState).toBe(0);
    second.wrapper.unmount();
    expect(stream().readyState).toBe(StreamStandIn.CLOSED);
  });

  it('tell the handler and have the application and run fetched again when something changes', () => {
    const heard: LiveEvent[] = [];
    const { wrapper, invalidate } = mountListener(heard);
    stream().say(change);
    expect(heard).toEqual([change]);
    const keys = invalidate.mock.calls.map(([filters]) => (filters as { queryKey: string[] }).queryKey);
    expect(keys).toContainEqual(['application', 'a1']);
    expect(keys).toContainEqual(['run', 'r1']);
    wrapper.unmount();
  });

  it('let a fetch that is under way come to its end, and fetch once more for all that was told meanwhile', async () => {
    const { wrapper, invalidate } = mountListener();
    const ends: (() => void)[] = [];
    invalidate.mockImplementation(() => new Promise<void>((resolve) => ends.push(resolve)));
    const keys = () => new Set(invalidate.mock.calls.map(([filters]) => JSON.stringify(filters))).size;
    const endAll = async () => {
      for (const end of ends.splice(0)) end();
      await vi.advanceTimersByTimeAsync(0);
    };

    for (const version of [2, 3, 4]) stream().say({ ...change, version });
    expect(invalidate).toHaveBeenCalledTimes(keys());
    await endAll();
    expect(invalidate).toHaveBeenCalledTimes(2 * keys());
    await endAll();
    expect(invalidate).toHaveBeenCalledTimes(2 * keys());
    wrapper.unmount();
  });

  it('stop the polling while they are connected and start it when they are cut', async () => {
    const { wrapper } = mountListener();
    expect(wrapper.text()).toBe('1000');
    stream().dispatchEvent(new Event('open'));
    await wrapper.vm.$nextTick();
    expect(wrapper.text()).toBe('false');
    stream().breakOff(false);
    await wrapper.vm.$nextTick();
    expect(wrapper.text()).toBe('1000');
    wrapper.unmount();
  });

  it('never poll for what is not active', () => {
    const { wrapper } = mountListener([], () => false);
    expect(wrapper.text()).toBe('false');
    wrapper.unmount();
  });

  it('try again, each time after a longer wait, when the browser has given up', () => {
    const { wrapper } = mountListener();
    stream().breakOff(true);
    vi.advanceTimersByTime(999);
    expect(StreamStandIn.opened).toHaveLength(1);
    vi.advanceTimersByTime(1);
    expect(StreamStandIn.opened).toHaveLength(2);
    stream().breakOff(true);
    vi.advanceTimersByTime(1999);
    expect(StreamStandIn.opened).toHaveLength(2);
    vi.advanceTimersByTime(1);
    expect(StreamStandIn.opened).toHaveLength(3);
    wrapper.unmount();
  });

  it('have everything fetched again when they come back, because what was missed is not told again', () => {
    const { wrapper, invalidate } = mountListener();
    stream().dispatchEvent(new Event('open'));
    expect(invalidate).not.toHaveBeenCalled();
    stream().breakOff(false);
    stream().dispatchEvent(new Event('open'));
    expect(invalidate).toHaveBeenCalledWith();
    wrapper.unmount();
  });
});
