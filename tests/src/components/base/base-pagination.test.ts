// @vitest-environment happy-dom
import { mount } from '@vue/test-utils';
import { describe, expect, it } from 'vitest';
import { createMemoryHistory, createRouter } from 'vue-router';
import BasePagination from '../../../../src/components/base/BasePagination.vue';

async function mountPages(page: number, pageCount: number) {
  const routes = [{ path: '/desk', component: { render: () => null } }];
  const router = createRouter({ history: createMemoryHistory(), routes });
  await router.push(`/desk?page=${page}`);
  const to = (target: number) => ({ path: '/desk', query: { page: target } });
  return mount(BasePagination, { props: { page, pageCount, to }, global: { plugins: [router] } });
}

describe('the pagination', () => {
  it('marks only the present page, although all its links lead to the same path', async () => {
    const pages = await mountPages(2, 3);
    const marked = pages.findAll('[aria-current]').map((link) => link.text());
    expect(marked).toEqual(['2']);
  });

  it('leaves pages out far from the present, the first and the last', async () => {
    const pages = await mountPages(5, 9);
    expect(pages.findAll('li').map((item) => item.text())).toEqual(['1', '…', '4', '5', '6', '…', '9']);
  });

  it('leads to the neighbours, and nowhere past the ends', async () => {
    const first = await mountPages(1, 3);
    expect(first.find('[rel="prev"]').exists()).toBe(false);
    expect(first.get('[rel="next"]').attributes('href')).toBe('/desk?page=2');
  });

  it('is not there when everything is on one page', async () => {
    expect((await mountPages(1, 1)).find('nav').exists()).toBe(false);
  });
});
