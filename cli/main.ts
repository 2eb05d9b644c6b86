import { DispersionError, PropagationError, UnsupportedDesign } from '../core/index.js';
import type { Context, ExitCode, Streams } from './commands/contract.js';
import { parse } from './commands/parser.js';
import { fileError, isSystemError, UserError } from './run/user-error.js';

export type { ExitCode, Streams } from './commands/contract.js';

/** Width of text where no terminal says otherwise. */
const COLUMNS = 100;

type MaybeTerminal = { readonly isTTY?: boolean; readonly columns?: number };

function contextOf(streams: Streams): Context {
  const terminal = streams.stdout as MaybeTerminal;
  const noColor = (process.env['NO_COLOR'] ?? '') !== '';
  return {
    streams,
    print: (text) => void streams.stdout.write(`${text}\n`),
    note: (text) => void streams.stderr.write(`${text}\n`),
    color: terminal.isTTY === true && !noColor,
    columns: terminal.isTTY ? (terminal.columns ?? COLUMNS) : COLUMNS,
  };
}

/** What the user is to know of an error: its own words where the input is at fault, one line and a way to the trace else. */
function describe(error: unknown): string {
  if (process.env['PULSEWRIGHT_DEBUG'] === '1' && error instanceof Error) return error.stack ?? error.message;
  if (error instanceof UserError || error instanceof UnsupportedDesign) return error.message;
  if (error instanceof PropagationError || error instanceof DispersionError) return error.message;
  if (isSystemError(error)) return (fileError(error, error.path ?? 'file system') as Error).message;
  const message = error instanceof Error ? error.message : String(error);
  return `internal error: ${message.split('\n')[0]} (set PULSEWRIGHT_DEBUG=1 and repeat for the trace)`;
}

/**
 * Runs one command line. Results go to stdout, everything else to stderr; never throws and never ends the process.
 * @param argv the words after the program's name
 * @returns 0 done; 1 done, but the goal was not met or levels are out of reach; 2 bad input or failure; 130 stopped by SIGINT
 */
export async function main(argv: readonly string[], streams: Streams): Promise<ExitCode> {
  const context = contextOf(streams);
  let lost: Error | null = null;
  // A reader that has seen enough (`| head`) is no failure; a full disk behind stdout is one.
  const onError = (error: NodeJS.ErrnoException) => {
    if (error.code !== 'EPIPE') lost ??= error;
  };
  streams.stdout.on('error', onError);
  streams.stderr.on('error', onError);
  try {
    const request = await parse(argv, context.columns);
    if (request.kind === 'text') context.print(request.text.trimEnd());
    const code = request.kind === 'text' ? 0 : await request.command.run(request.args, context);
    await new Promise<void>((done) => void streams.stdout.write('', () => done()));
    if (lost === null) return code;
    context.note(`pulsewright: stdout: ${(lost as Error).message}`);
    return 2;
  } catch (error) {
    context.note(describe(error));
    return 2;
  }
}
