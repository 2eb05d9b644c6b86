// Compiles every AssemblyScript source of core (*.as) to a module of bytes beside it (*.bytes.ts), which is committed: a
// checkout runs without the compiler, and the same source always gives the same bytes. `--check` only compares.
import { readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import asc from 'assemblyscript/asc';

const OPTIONS = ['-O3', '--runtime', 'stub', '--noAssert', '--enable', 'simd', '--enable', 'bulk-memory'];
const WIDTH = 100;

async function compile(source) {
  let binary = null;
  const { error, stderr } = await asc.main(['kernel.ts', '--outFile', 'kernel.wasm', ...OPTIONS], {
    readFile: (name) => (name === 'kernel.ts' ? source : null),
    writeFile: (name, contents) => {
      if (name === 'kernel.wasm') binary = contents;
    },
    listFiles: () => [],
  });
  if (error) throw new Error(`${error.message}\n${stderr.toString()}`);
  return Buffer.from(binary).toString('base64');
}

function asModule(name, base64) {
  const lines = base64.match(new RegExp(`.{1,${WIDTH}}`, 'g')).map((line) => `  '${line}'`);
  return `/** Compiled from ${name} by \`npm run build:wasm\`; base64. */\nexport const BYTES =\n${lines.join(' +\n')};\n`;
}

const check = process.argv.includes('--check');
const sources = readdirSync('core', { recursive: true, encoding: 'utf8' }).filter((f) => f.endsWith('.as'));
for (const file of sources.sort()) {
  const path = join('core', file);
  const text = asModule(path.split('/').pop(), await compile(readFileSync(path, 'utf8')));
  const target = path.replace(/\.as$/, '.bytes.ts');
  if (!check) writeFileSync(target, text);
  else if (readFileSync(target, 'utf8') !== text) {
    console.error(`${target} is not what ${path} compiles to: run npm run build:wasm`);
    process.exitCode = 1;
  }
}
