// @vitest-environment happy-dom
import { mount } from '@vue/test-utils';
import { describe, expect, it } from 'vitest';
import { createMemoryHistory, createRouter } from 'vue-router';
import PageMissing from '../../../../src/components/applications/PageMissing.vue';
import { countPages } from '../../../../shared/pages.ts';

const router = createRouter({
  history: createMemoryHistory(),
  routes: [
    { path: '/', component: { template: '<p />' } },
    { path: '/desk', name: 'desk', component: { template: '<p />' } },
  ],
});

function mountMissing(page: number, pageCount: number) {
  const to = (last: number) => ({ name: 'desk', query: { page: String(last) } });
  return mount(PageMissing, { props: { page, pageCount, to }, global: { plugins: [router] } });
}

describe('a page past the last one', () => {
  it('is said not to exist, instead of that there are no applications, with a way to the last page', () => {
    const missing = mountMissing(999, 2);
    expect(missing.text()).toContain('Page 999 does not exist; there are 2 pages');
    expect(missing.get('a').attributes('href')).toBe('/desk?page=2');
    expect(mountMissing(2, 1).text()).toContain('Page 2 does not exist; there is 1 page');
  });
});

describe('the number of pages', () => {
  it('counts a last page that is not full, and none of an empty or unknown list', () => {
    expect(countPages({ total: 39, pageSize: 20 })).toBe(2);
    expect(countPages({ total: 40, pageSize: 20 })).toBe(2);
    expect(countPages({ total: 0, pageSize: 20 })).toBe(0);
    expect(countPages(undefined)).toBe(0);
  });
});
