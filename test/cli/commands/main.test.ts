import { PassThrough, Writable } from 'node:stream';
import { describe, expect, it, vi } from 'vitest';
import { commands } from '../../../cli/commands/registry.js';
import { main } from '../../../cli/main.js';
import { packageVersion } from '../../../cli/run/package.js';
import { FIXED, invoke, studyFile } from './invoke.js';

describe('the command line', () => {
  it('prints its version on stdout', async () => {
    expect(await invoke(['--version'])).toEqual({ code: 0, out: `${packageVersion()}\n`, err: '' });
  });

  it('lists every command of the registry in its help', async () => {
    const { code, out } = await invoke(['--help']);
    expect(code).toBe(0);
    // Long summaries are wrapped to the width of the terminal.
    const flat = out.replace(/\s+/g, ' ');
    for (const { name, summary } of commands)
      expect(flat).toMatch(new RegExp(`pulsewright ${name} .* ${summary}`));
  });

  it.each(commands.map(({ name }) => name))('shows examples in the help of %s', async (name) => {
    const { code, out } = await invoke([name, '--help']);
    expect(code).toBe(0);
    expect(out).toMatch(new RegExp(`Examples:\\s+pulsewright ${name} `));
  });

  it.each([
    [[], 'no command given'],
    [['optimise', 'study.yaml'], 'unknown command optimise; nearest: optimize'],
    [['evaluate', 'study.yaml', '--jsom'], 'unknown option --jsom; nearest: --json'],
    [['evaluate', '--tracee', 'x', 'study.yaml'], 'unknown option --tracee; nearest: --trace'],
    [['evaluate', '-x', 'study.yaml'], 'unknown option -x'],
    [['evaluate', 'one.yaml', 'two.yaml'], 'unknown argument: two.yaml'],
    [['optimize', 'study.yaml'], 'missing required argument: out'],
    [['optimize', 'study.yaml', '--out', 'a', '--out', 'b'], '--out: given 2 times'],
    [
      ['optimize', 'study.yaml', '--out', 'a', '--workers', 'two'],
      '--workers: got two; needs a whole number',
    ],
    [['optimize', 'study.yaml', '--out', 'a', '--workers', '0'], '--workers: got 0; needs a whole number'],
    [['evaluate', 'study.yaml', '--set', 'nothing'], '--set: got "nothing"; needs path=value'],
    [['evaluate', 'nowhere/study.yaml'], 'nowhere/study.yaml: no such file or directory'],
    [['evaluate', '.'], '.: is a directory; needs a file'],
  ])('refuses %j', async (argv, message) => {
    const { code, out, err } = await invoke(argv as string[]);
    expect(code).toBe(2);
    expect(out).toBe('');
    expect(err).toContain(message);
    expect(err).not.toMatch(/\n\s+at /);
  });

  it.each(['/bin/bash', '/bin/zsh'])('prints a completion script for %s', async (shell) => {
    vi.stubEnv('SHELL', shell);
    vi.stubEnv('ZSH_NAME', '');
    const { code, out } = await invoke(['completion']);
    vi.unstubAllEnvs();
    expect(code).toBe(0);
    expect(out).toContain(shell.endsWith('zsh') ? '#compdef pulsewright' : 'complete -o bashdefault');
  });

  it('completes commands and the options of a command', async () => {
    const first = await invoke(['--get-yargs-completions', 'pulsewright', 'o']);
    expect(first.out.split('\n')).toContain('optimize');
    const second = await invoke(['--get-yargs-completions', 'pulsewright', 'optimize', '--']);
    expect(second.out.split('\n')).toContain('--resume');
  });

  it('tells an unexpected error in one line with the way to its trace', async () => {
    const evaluate = commands.find(({ name }) => name === 'evaluate')!;
    const broken = vi.spyOn(evaluate, 'load').mockResolvedValue({
      configure: (yargs) => yargs.positional('study', { type: 'string' }),
      run: async () => {
        throw new TypeError('a cog is loose');
      },
    });
    const quiet = await invoke(['evaluate', 'study.yaml']);
    vi.stubEnv('PULSEWRIGHT_DEBUG', '1');
    const loud = await invoke(['evaluate', 'study.yaml']);
    vi.unstubAllEnvs();
    broken.mockRestore();
    expect(quiet.code).toBe(2);
    expect(quiet.err).toBe(
      'internal error: a cog is loose (set PULSEWRIGHT_DEBUG=1 and repeat for the trace)\n',
    );
    expect(loud.err).toMatch(/a cog is loose\n\s+at /);
  });
});

/** A stdout that fails as the operating system does. */
function failing(code: string): Writable {
  return new Writable({
    write: (_chunk, _encoding, done) => done(Object.assign(new Error(`write ${code}`), { code })),
  });
}

describe('stdout that fails', () => {
  const argv = () => ['evaluate', studyFile(FIXED)];
  const stderr = () => new Writable({ write: (_c, _e, done) => done() });

  it('takes a reader that has gone for no failure', async () => {
    expect(await main(argv(), { stdin: new PassThrough(), stdout: failing('EPIPE'), stderr: stderr() })).toBe(
      0,
    );
  });

  it('takes a full disk for a failure', async () => {
    expect(
      await main(argv(), { stdin: new PassThrough(), stdout: failing('ENOSPC'), stderr: stderr() }),
    ).toBe(2);
  });
});

describe('colour', () => {
  const bold = String.fromCharCode(27);
  const run = async () => {
    let text = '';
    const sink = new Writable({
      write(chunk, _encoding, done) {
        text += String(chunk);
        done();
      },
    });
    const stdout = Object.assign(sink, {
      isTTY: true,
      columns: 100,
    });
    await main(['evaluate', studyFile(FIXED)], { stdin: new PassThrough(), stdout, stderr: stdout });
    return text;
  };

  it('is used on a terminal and left out with NO_COLOR', async () => {
    vi.stubEnv('NO_COLOR', '');
    expect(await run()).toContain(bold);
    vi.stubEnv('NO_COLOR', '1');
    expect(await run()).not.toContain(bold);
    vi.unstubAllEnvs();
  });
});
