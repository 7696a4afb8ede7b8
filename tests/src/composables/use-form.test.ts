// @vitest-environment happy-dom
import { describe, expect, it } from 'vitest';
import { effectScope, nextTick, type EffectScope } from 'vue';
import { ApiProblem } from '../../../src/api/client.ts';
import { useForm } from '../../../src/composables/useForm.ts';
import { usePageTitle } from '../../../src/composables/usePageTitle.ts';

function open(prefix?: string): { form: ReturnType<typeof useForm>; scope: EffectScope } {
  const scope = effectScope();
  const form = scope.run(() => {
    usePageTitle('Equipment');
    return useForm({ prefix });
  });
  if (!form) throw new Error('the scope ran nothing');
  return { form, scope };
}

const refusal = (errors: { path: string; message: string }[], title = 'Check the answers') =>
  new ApiProblem({ title, status: 400, code: 'validation', errors });

describe('a form', () => {
  it('puts each error at its field and into the summary when the server refuses the answers', async () => {
    const { form, scope } = open('answers.');
    const answer = await form.submit(() =>
      Promise.reject(refusal([{ path: 'answers.units.0.count', message: 'Enter the number' }])),
    );
    expect(answer).toBeUndefined();
    expect(form.field('units.0.count')).toEqual({ id: 'field-units-0-count', error: 'Enter the number' });
    expect(form.field('units.1.count').error).toBeUndefined();
    expect(form.summary.value).toEqual([{ id: 'field-units-0-count', message: 'Enter the number' }]);
    expect(form.title.value).toBeUndefined();
    scope.stop();
  });

  it('says the title of the problem when no field is at fault', async () => {
    const { form, scope } = open();
    await form.submit(() => Promise.reject(refusal([], 'Ana Rell changed it at 09:05')));
    expect(form.title.value).toBe('Ana Rell changed it at 09:05');
    expect(form.hasErrors.value).toBe(true);
    scope.stop();
  });

  it('puts "Error: " in front of the title while errors stand, and takes it away after', async () => {
    const { form, scope } = open();
    form.fail([{ path: 'kva', message: 'Enter the rating' }]);
    await nextTick();
    expect(document.title).toBe('Error: Equipment – Feederwright');
    await form.submit(() => Promise.resolve('saved'));
    await nextTick();
    expect(document.title).toBe('Equipment – Feederwright');
    scope.stop();
  });

  it('takes "Error: " away when the page with the errors is left', async () => {
    const { form, scope } = open();
    form.fail([{ path: 'kva', message: 'Enter the rating' }]);
    await nextTick();
    scope.stop();
    const next = effectScope();
    next.run(() => usePageTitle('Papers'));
    await nextTick();
    expect(document.title).toBe('Papers – Feederwright');
    next.stop();
  });

  it('sends once when the button is pressed twice', async () => {
    const { form, scope } = open();
    let sent = 0;
    let finish = (_: string) => undefined as void;
    const action = () => {
      sent += 1;
      return new Promise<string>((resolve) => (finish = resolve));
    };
    const first = form.submit(action);
    const second = form.submit(action);
    finish('saved');
    expect(await first).toBe('saved');
    expect(await second).toBeUndefined();
    expect(sent).toBe(1);
    expect(form.busy.value).toBe(false);
    scope.stop();
  });

  it('lets a fault of the program through, so that it is not taken for a refusal', async () => {
    const { form, scope } = open();
    await expect(form.submit(() => Promise.reject(new TypeError('x is not a function')))).rejects.toThrow(
      'x is not a function',
    );
    expect(form.busy.value).toBe(false);
    scope.stop();
  });
});
