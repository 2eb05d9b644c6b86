import yargs, { type Argv } from 'yargs';
import { packageVersion } from '../run/package.js';
import { UserError } from '../run/user-error.js';
import { nearestName } from '../study/nearest.js';
import type { Arguments, Command, CommandEntry } from './contract.js';
import { commands } from './registry.js';

/** What a command line asks for. */
export type Request =
  | { readonly kind: 'run'; readonly command: Command; readonly args: Arguments }
  /** Help, version or completion: only to be printed. */
  | { readonly kind: 'text'; readonly text: string };

/** How the shell asks for completions; set by the generated completion script. */
const COMPLETIONS = '--get-yargs-completions';
const COMPLETION_COMMAND = 'completion';

const EPILOGUE = `Exit codes: 0 done · 1 done, but the goal was not met or brightness levels are out of reach
2 bad input or failure · 130 stopped by Ctrl-C with everything finished on disk`;

function base(columns: number): Argv {
  return yargs([])
    .scriptName('pulsewright')
    .locale('en')
    .exitProcess(false)
    .strict()
    .wrap(Math.min(100, columns))
    .parserConfiguration({
      'dot-notation': false,
      'camel-case-expansion': false,
      'boolean-negation': false,
      'parse-numbers': false,
      'parse-positional-numbers': false,
    })
    .usage(
      'pulsewright <command> [options]\n\nWhich excitation pulse gives the least multiphoton light at the brightness you need?',
    )
    .version(packageVersion())
    .help()
    .alias('help', 'h')
    .epilogue(EPILOGUE);
}

/** Loads only the commands that the line names; a completion request may need any of them. */
async function loadNamed(argv: readonly string[]): Promise<Map<CommandEntry, Command>> {
  const all = argv.includes(COMPLETIONS);
  const named = commands.filter((entry) => all || argv.includes(entry.name));
  return new Map(await Promise.all(named.map(async (entry) => [entry, await entry.load()] as const)));
}

function optionsOf(parser: Argv): string[] {
  // yargs keeps the declared options on the instance; its types do not show them.
  const { key } = (parser as unknown as { getOptions(): { key: Record<string, boolean> } }).getOptions();
  return Object.keys(key).filter((name) => name.length > 1);
}

/** Refuses unknown options before yargs takes the word after one for its value and complains about something else. */
function checkOptions(argv: readonly string[], command: Command | undefined, columns: number): void {
  const known = optionsOf(command === undefined ? base(columns) : command.configure(base(columns)));
  const end = argv.indexOf('--');
  for (const word of end < 0 ? argv : argv.slice(0, end)) {
    if (/^-[a-zA-Z]/.test(word) && word !== '-h') throw new UserError(`unknown option ${word.slice(0, 80)}`);
    const name = /^--([^=]+)/.exec(word)?.[1];
    if (name === undefined || known.includes(name)) continue;
    const near = nearestName(name, known);
    const hint = near === null ? '' : `; nearest: --${near}`;
    throw new UserError(`unknown option --${name.slice(0, 80)}${hint}`);
  }
}

/** yargs' complaint in the form of all our messages. */
function complaint(message: string): string {
  const text = message.split('\n')[0].slice(0, 300);
  return text.replace(/^[A-Z]/, (letter) => letter.toLowerCase());
}

function checkCommand(argv: readonly string[]): void {
  const first = argv.find((word) => !word.startsWith('-'));
  const known = [...commands.map((entry) => entry.name), COMPLETION_COMMAND];
  if (argv.includes(COMPLETIONS) || first === undefined || known.includes(first)) return;
  const near = nearestName(first, known);
  const hint = near === null ? '' : `; nearest: ${near}`;
  throw new UserError(`unknown command ${first.slice(0, 80)}${hint}; see pulsewright --help`);
}

/**
 * Parses a command line without touching the process.
 * @throws UserError for everything that the line has wrong
 */
export async function parse(argv: readonly string[], columns: number): Promise<Request> {
  checkCommand(argv);
  const loaded = await loadNamed(argv);
  const first = argv.find((word) => !word.startsWith('-'));
  const named = commands.find((entry) => entry.name === first);
  if (!argv.includes(COMPLETIONS)) checkOptions(argv, named && loaded.get(named), columns);
  // yargs counts the words of its own completion command as unknown.
  const parser = base(columns)
    .strict(first !== COMPLETION_COMMAND)
    .completion(COMPLETION_COMMAND, 'print the completion script of your shell (bash or zsh, by $SHELL)');
  for (const entry of commands) {
    const command = loaded.get(entry);
    parser.command(`${entry.name} ${entry.positionals}`, entry.summary, (inner) => {
      return command === undefined ? inner : command.configure(inner);
    });
  }
  let failure: Error | null = null;
  parser.fail((message, error) => {
    failure ??= error instanceof UserError ? error : new UserError(complaint(message ?? String(error)));
  });
  let text = '';
  const parsed = await parser.parseAsync([...argv], {}, (_error: unknown, _args: unknown, output: string) => {
    text += output;
  });
  if (failure !== null) throw failure;
  if (text !== '') return { kind: 'text', text };
  const entry = commands.find(({ name }) => name === parsed._[0]);
  if (entry === undefined) throw new UserError('no command given; see pulsewright --help');
  return { kind: 'run', command: loaded.get(entry)!, args: parsed };
}
