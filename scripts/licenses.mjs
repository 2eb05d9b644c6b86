// Writes THIRD_PARTY_LICENSES.md: every package that an installation without development tools brings.
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

const lock = JSON.parse(readFileSync('package-lock.json', 'utf8'));
const rows = [];
for (const [path, entry] of Object.entries(lock.packages)) {
  if (path === '' || entry.dev || entry.devOptional) continue;
  const file = join(path, 'package.json');
  const manifest = existsSync(file) ? JSON.parse(readFileSync(file, 'utf8')) : {};
  const license =
    manifest.license ?? manifest.licenses?.map((l) => l.type).join(' or ') ?? entry.license ?? 'see package';
  rows.push([
    manifest.name ?? path.replace(/^.*node_modules\//, ''),
    entry.version,
    typeof license === 'string' ? license : license.type,
  ]);
}
rows.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
const lines = [
  '# Licences of dependencies',
  '',
  'Made by `npm run licenses` from the lock file.',
  '',
  '| package | version | licence |',
  '| --- | --- | --- |',
];
for (const row of new Set(rows.map((r) => `| ${r.join(' | ')} |`))) lines.push(row);
writeFileSync('THIRD_PARTY_LICENSES.md', `${lines.join('\n')}\n`);
