import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, test } from 'vitest';
import { FieldEditor, type FieldValue } from '../../../app/quantity/FieldEditor.tsx';
import type { Field } from '../../../sim-core/design/field.ts';
import { GROUPS, TITLE_FIELDS } from '../../../sim-core/design/schema.ts';

const FIELDS = Object.entries({ ...GROUPS, title: TITLE_FIELDS }).flatMap(([group, fields]) =>
  Object.entries(fields as Record<string, Field>).map(([name, field]) => ({
    place: `${group}.${name}`,
    field,
  })),
);

const render = (field: Field, value: FieldValue, place = 'here') =>
  renderToStaticMarkup(
    <FieldEditor field={field} value={value} place={place} onChange={() => null} />,
  );

describe('the editor of every field', () => {
  test.each(FIELDS)(
    '$place has a control tied to its label and its meaning',
    ({ place, field }) => {
      const markup = render(field, field.default, place);
      expect(markup).toContain(`data-place="${place}"`);
      const label = /<label for="([^"]+)"/.exec(markup)?.[1];
      const control = /<(?:input|select|textarea)[^>]* id="([^"]+)"/.exec(markup)?.[1];
      expect(label).toBeDefined();
      expect(control).toBe(label);
      for (const id of (/aria-describedby="([^"]+)"/.exec(markup)?.[1] ?? 'none').split(' ')) {
        expect(markup).toContain(`id="${id}"`);
      }
      // WAI-ARIA 1.2: value attributes are decimal numbers, and 1e-9 is none.
      expect(markup).not.toMatch(/aria-value(now|min|max)="[^"]*e/i);
      // The content-security policy admits no style in markup.
      expect(markup).not.toMatch(/ style=|<style/);
    },
  );

  test('a number shows engineering notation, and absence its word', () => {
    expect(render(GROUPS.bridge.frequency, 22e3)).toContain('value="22 kHz"');
    expect(render(GROUPS.supply.currentLimit, null)).toMatch(/placeholder="none".* value=""/);
  });

  test('text from a design stays text', () => {
    const markup = render(TITLE_FIELDS.name, '"><img src=x onerror=alert(1)>');
    expect(markup).not.toContain('<img');
  });
});
