import { QInput } from 'quasar';
import { afterEach, describe, expect, test } from 'vitest';
import { defineComponent } from 'vue';
import FormField from '../../src/components/base/FormField.vue';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

function fieldWith(attributes: string) {
  return mountPart(
    defineComponent({
      components: { FormField, QInput },
      template: `<FormField v-slot="{ field }" label="Allowed error" ${attributes}><QInput v-bind="field" model-value="12" /></FormField>`,
    }),
  );
}

/** The elements that describe the control, as a screen reader finds them. */
function descriptions(input: Element): string[] {
  const ids = input.getAttribute('aria-describedby')?.split(' ') ?? [];
  return ids.map((id) => document.getElementById(id)?.textContent?.trim() ?? `missing: ${id}`);
}

describe('a form field', () => {
  test('ties its label to the control', () => {
    const field = fieldWith('');
    const label = field.get('label.label');
    expect(label.text()).toBe('Allowed error');
    expect(label.attributes('for')).toBe(field.get('input').attributes('id'));
    expect(field.get('input').attributes('aria-describedby')).toBeUndefined();
    expect(field.get('input').attributes('aria-invalid')).toBeUndefined();
  });

  test('describes the control by its help', () => {
    const input = fieldWith('help="In the unit of the soft sensor."').get('input').element;
    expect(descriptions(input)).toEqual(['In the unit of the soft sensor.']);
  });

  test('marks the control invalid and describes it by the error before the help', () => {
    const field = fieldWith(
      'help="In °C." error="Must be larger than 0. Write the largest bias you can live with."',
    );
    const input = field.get('input');
    expect(input.attributes('aria-invalid')).toBe('true');
    expect(descriptions(input.element)).toEqual([
      'Must be larger than 0. Write the largest bias you can live with.',
      'In °C.',
    ]);
    expect(field.get('[role=alert]').text()).toContain('Must be larger than 0.');
  });

  test('shows each of several errors, and none for an empty list', () => {
    expect(fieldWith(`:error="['Too small.', 'Not a number.']"`).findAll('[role=alert] p')).toHaveLength(2);
    expect(fieldWith(':error="[]"').find('[role=alert]').exists()).toBe(false);
  });

  test('tells screen readers what is required and people what is optional', () => {
    expect(fieldWith('required').get('input').attributes('aria-required')).toBe('true');
    expect(fieldWith('optional').get('label.label').text()).toBe('Allowed error, optional');
  });

  test('labels a group of controls together', () => {
    const group = mountPart(FormField, {
      props: { label: 'Correction', group: true, error: 'Choose one.' },
      slots: { default: '<input type="radio"><input type="radio">' },
    }).get('[role=group]');
    expect(document.getElementById(group.attributes('aria-labelledby')!)?.textContent).toBe('Correction');
    expect(descriptions(group.element)).toEqual(['Choose one.']);
  });
});
