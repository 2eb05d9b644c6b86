import { type Dimension, describeDimension, dimensionInfo } from '../../../core/index.js';
import type { Key, Leaf, Section } from '../keys/kinds.js';
import { describeBounds } from '../keys/kinds.js';
import { studyKeys } from '../keys/table.js';

type Schema = Record<string, unknown>;

/** JSON Schema (draft-07) of study files, for completion and checks in an editor; from the table of keys. */
export function jsonSchema(): Schema {
  return {
    $schema: 'http://json-schema.org/draft-07/schema#',
    title: 'pulsewright study, format 1',
    ...sectionSchema(studyKeys),
  };
}

function sectionSchema(section: Section): Schema {
  const entries = Object.entries(section.keys);
  return {
    type: 'object',
    description: section.help,
    additionalProperties: false,
    required: entries.filter(([, key]) => isRequired(key)).map(([name]) => name),
    properties: Object.fromEntries(entries.map(([name, key]) => [name, keySchema(key)])),
  };
}

function isRequired(key: Key): boolean {
  if (key.kind === 'leaf') return key.presence.kind === 'required';
  return key.kind === 'list' || key.presence === 'required';
}

function keySchema(key: Key): Schema {
  if (key.kind === 'section') return sectionSchema(key);
  if (key.kind === 'leaf') return leafSchema(key);
  const items = sectionSchema(key.item);
  return { type: 'array', description: key.help, minItems: 1, maxItems: key.longest, items };
}

function leafSchema(leaf: Leaf<unknown>): Schema {
  const { rule, help } = leaf;
  switch (rule.kind) {
    case 'quantity': {
      const bounds = describeBounds(rule.bounds, rule.dimension);
      const description = `${help}: ${describeDimension(rule.dimension)}${bounds ? `; ${bounds}` : ''}`;
      const fixed = quantitySchema(rule.dimension);
      return rule.free ? { description, anyOf: [fixed, ...freeSchemas(fixed)] } : { description, ...fixed };
    }
    case 'interval': {
      const description = `${help}; each ${describeDimension(rule.dimension)}`;
      return { description, type: 'array', minItems: 2, maxItems: 2, items: quantitySchema(rule.dimension) };
    }
    case 'integer':
      return { description: help, type: 'integer', minimum: rule.from, maximum: rule.to };
    case 'choice':
      return { description: help, enum: rule.values };
    case 'text':
      return { description: help, type: 'string', maxLength: rule.longest };
    case 'version':
      return { description: help, const: rule.version };
  }
}

function freeSchemas(fixed: Schema): Schema[] {
  const form = (required: string[], properties: Schema): Schema => ({
    type: 'object',
    additionalProperties: false,
    required,
    properties,
  });
  return [
    form(['from', 'to'], { from: fixed, to: fixed, scale: { enum: ['linear', 'log'] } }),
    form(['of'], { of: { type: 'array', minItems: 1, items: fixed } }),
    form(['same_as'], { same_as: { type: 'string' } }),
  ];
}

function quantitySchema(dimension: Dimension): Schema {
  const info = dimensionInfo(dimension);
  const units = info.units.map(({ name }) =>
    name.replace(/[\^$.*+?()[\]{}|]/g, '\\$&').replace(/^u|(?<=\/)u/, '[u\u00b5\u03bc]'),
  );
  const pattern = `^\\s*[-+]?([0-9]+\\.?[0-9]*|\\.[0-9]+)([eE][-+]?[0-9]+)?\\s*(${units.join('|')})\\s*$`;
  const text = { type: 'string', pattern };
  return info.bare ? { anyOf: [{ type: 'number' }, text] } : text;
}
