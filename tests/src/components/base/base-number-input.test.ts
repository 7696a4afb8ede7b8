// @vitest-environment happy-dom
import { mount } from '@vue/test-utils';
import { describe, expect, it } from 'vitest';
import BaseNumberInput from '../../../../src/components/base/BaseNumberInput.vue';

function mountInput(given: { modelValue?: number | string; error?: string; hint?: string } = {}) {
  return mount(BaseNumberInput, {
    props: { id: 'kva', label: 'Rating in kilovolt-amperes', unit: 'kVA', ...given },
  });
}

describe('the number input', () => {
  it('hands on the number when thousands separators and the unit are typed', async () => {
    const input = mountInput();
    await input.get('input').setValue('1,250 kVA');
    expect(input.emitted('update:modelValue')).toEqual([[1250]]);
  });

  it('keeps the text as it was typed when its own number comes back', async () => {
    const input = mountInput();
    await input.get('input').setValue('1,250.0');
    await input.setProps({ modelValue: 1250 });
    expect(input.get('input').element.value).toBe('1,250.0');
  });

  it('shows another number when one is set from outside', async () => {
    const input = mountInput({ modelValue: 5 });
    await input.setProps({ modelValue: 75 });
    expect(input.get('input').element.value).toBe('75');
  });

  it('empties itself when the answer is taken away', async () => {
    const input = mountInput({ modelValue: 5 });
    await input.setProps({ modelValue: undefined });
    expect(input.get('input').element.value).toBe('');
  });

  it('hands on undefined when it is emptied', async () => {
    const input = mountInput({ modelValue: 5 });
    await input.get('input').setValue('');
    expect(input.emitted('update:modelValue')).toEqual([[undefined]]);
  });

  it('is a text field with a decimal keyboard, so that separators and units can be typed at all', () => {
    const { type, inputmode } = mountInput().get('input').attributes();
    expect({ type, inputmode }).toEqual({ type: 'text', inputmode: 'decimal' });
  });

  it('is described by its hint and its error when it has both', () => {
    const input = mountInput({ hint: 'From the nameplate.', error: 'Enter the rating' });
    const field = input.get('input');
    expect(field.attributes('aria-describedby')).toBe('kva-hint kva-error');
    expect(field.attributes('aria-invalid')).toBe('true');
    expect(input.get('#kva-error').text()).toBe('Error: Enter the rating');
    expect(input.get('label').attributes('for')).toBe('kva');
  });
});
