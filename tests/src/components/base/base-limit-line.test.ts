// @vitest-environment happy-dom
import { mount } from '@vue/test-utils';
import { describe, expect, it } from 'vitest';
import BaseLimitLine from '../../../../src/components/base/BaseLimitLine.vue';
import { drawLimitLine } from '../../../../shared/drawings/limit-line.ts';

const given = { value: 92.3, before: 81.2, limit: 87.5, comparison: '<=', unit: '%' } as const;

describe('the drawn limit line', () => {
  it('says in its description what it draws', () => {
    const line = mount(BaseLimitLine, { props: { question: 'Interrupting duty', ...given } });
    const svg = line.get('svg[role="img"]');
    const [titleId, descriptionId] = (svg.attributes('aria-labelledby') ?? '').split(' ');
    expect(line.get(`[id="${titleId}"]`).text()).toBe('Interrupting duty');
    expect(line.get(`[id="${descriptionId}"]`).text()).toBe(
      '92.3\u00a0% against at most 87.5\u00a0%, outside the limit. Before the project: 81.2\u00a0%.',
    );
  });

  it('draws the limit, the pointer and the ring at their places and marks the value as beyond', () => {
    const line = mount(BaseLimitLine, { props: { question: 'Interrupting duty', ...given } });
    const places = drawLimitLine(given);
    expect(line.get('line.limit').attributes('x1')).toBe(`${places.limitAt}%`);
    const pointer = line.get('path.value');
    expect(pointer.classes()).toContain('beyond');
    expect(pointer.element.parentElement?.getAttribute('x')).toBe(`${places.valueAt}%`);
    expect(line.get('circle.before').element.parentElement?.getAttribute('x')).toBe(`${places.beforeAt}%`);
  });

  it('shows no pointer when nothing was computed', () => {
    const line = mount(BaseLimitLine, { props: { question: 'Duty', ...given, value: null } });
    expect(line.find('path.value').exists()).toBe(false);
    expect(line.get('text.value-text').text()).toBe('Not evaluated');
  });
});
