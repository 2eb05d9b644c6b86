import { describeDimension, exactQuantity, joinNames, unitNames } from '../../../core/index.js';
import { describeBounds, type Key, type Leaf } from '../keys/kinds.js';
import { keyEntries } from '../keys/paths.js';

/** The keys of a study file as a Markdown table: key, default, allowed, meaning. */
export function keyTable(): string {
  const rows = keyEntries.map(({ pattern, key }) => [
    `\`${pattern}\``,
    defaultOf(key),
    allowed(key),
    key.help,
  ]);
  const head = ['key', 'default', 'allowed', 'meaning'];
  return [head, head.map(() => '---'), ...rows].map((cells) => `| ${cells.join(' | ')} |`).join('\n');
}

function defaultOf(key: Key): string {
  if (key.kind === 'list') return 'required';
  if (key.kind === 'section') return { required: 'required', empty: '', none: 'none' }[key.presence];
  const { presence, rule } = key;
  if (presence.kind === 'required') return 'required';
  if (presence.kind === 'none') return 'none';
  const value: unknown = presence.value;
  if (rule.kind === 'quantity') return exactQuantity(value as number, rule.dimension);
  return rule.kind === 'text' ? 'empty' : String(value);
}

function allowed(key: Key): string {
  if (key.kind === 'list') return `1 to ${key.longest} entries`;
  if (key.kind === 'section') return 'a mapping';
  return leafAllowed(key) + (key.only === undefined ? '' : `; only with a ${key.only}`);
}

function leafAllowed({ rule }: Leaf<unknown>): string {
  switch (rule.kind) {
    case 'quantity': {
      const bounds = describeBounds(rule.bounds, rule.dimension);
      const units = unitNames(rule.dimension);
      const kind = rule.dimension === 'fraction' ? describeDimension('fraction') : joinNames(units);
      return [kind, bounds, rule.free ? 'may be free' : ''].filter((part) => part !== '').join('; ');
    }
    case 'interval':
      return `two values in ${joinNames(unitNames(rule.dimension))}, the lower one first`;
    case 'integer':
      return `whole number from ${rule.from}${rule.to < 1e6 ? ` to ${rule.to}` : ''}`;
    case 'choice':
      return rule.values.join(', ');
    case 'text':
      return `one line, at most ${rule.longest} characters`;
    case 'version':
      return String(rule.version);
  }
}
