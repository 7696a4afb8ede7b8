// @vitest-environment happy-dom
import { enableAutoUnmount, mount } from '@vue/test-utils';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { nextTick } from 'vue';
import BaseErrorSummary from '../../../../src/components/base/BaseErrorSummary.vue';

enableAutoUnmount(afterEach);
afterEach(() => document.body.replaceChildren());

const two = [
  { id: 'kva', message: 'Enter the rating' },
  { id: null, message: 'Load the page again' },
];

function mountSummary(errors: { id: string | null; message: string }[] = two) {
  return mount(BaseErrorSummary, { props: { errors, attempt: 1 }, attachTo: document.body });
}

describe('the error summary', () => {
  it('counts the answers in its heading', () => {
    expect(mountSummary().get('h2').text()).toBe('2 answers need attention');
    expect(mountSummary(two.slice(0, 1)).get('h2').text()).toBe('1 answer needs attention');
  });

  it('takes the focus when it appears and again when the form is refused again', async () => {
    const summary = mountSummary();
    await nextTick();
    expect(document.activeElement).toBe(summary.element);
    (document.activeElement as HTMLElement).blur();
    await summary.setProps({ attempt: 2 });
    await nextTick();
    expect(document.activeElement).toBe(summary.element);
  });

  it('keeps the alert apart from the element that is focused', () => {
    const summary = mountSummary();
    expect(summary.attributes('role')).toBeUndefined();
    expect(summary.attributes('tabindex')).toBe('-1');
    expect(summary.get('[role="alert"]').element).not.toBe(summary.element);
  });

  it('shows the label first and then focuses the field without scrolling when a link is followed', async () => {
    document.body.innerHTML = '<label id="kva-label" for="kva">Rating</label><input id="kva">';
    const label = document.getElementById('kva-label') as HTMLElement;
    const field = document.getElementById('kva') as HTMLElement;
    const calls: string[] = [];
    label.scrollIntoView = () => void calls.push('label shown');
    const focus = vi.spyOn(field, 'focus').mockImplementation((options) => {
      calls.push(`focused, preventScroll ${options?.preventScroll}`);
    });
    await mountSummary().get('a[href="#kva"]').trigger('click');
    expect(focus).toHaveBeenCalledOnce();
    expect(calls).toEqual(['label shown', 'focused, preventScroll true']);
  });

  it('says an error without a field as plain text', () => {
    const summary = mountSummary();
    expect(summary.findAll('a')).toHaveLength(1);
    expect(summary.findAll('li')[1]?.text()).toBe('Load the page again');
  });
});
