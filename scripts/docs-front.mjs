// Makes docs/front.svg: the front of the starter study that `init` writes, by the built command itself.
import { execFileSync } from 'node:child_process';
import { copyFileSync, mkdirSync, mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const out = join(mkdtempSync(join(tmpdir(), 'pulsewright-docs-')), 'run');
execFileSync(
  process.execPath,
  ['bin/pulsewright.js', 'optimize', 'cli/study/starters/resonant.yaml', '--out', out],
  {
    stdio: 'inherit',
  },
);
mkdirSync('docs', { recursive: true });
copyFileSync(join(out, 'front.svg'), join('docs', 'front.svg'));
