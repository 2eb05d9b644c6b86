import type { EventEmitter } from 'node:events';
import type { Argv } from 'yargs';

/** 0 done; 1 done, but the goal was not met or levels are out of reach; 2 bad input or failure; 130 stopped by SIGINT. */
export type ExitCode = 0 | 1 | 2 | 130;

/** What a command talks to. */
export interface Streams {
  readonly stdin: NodeJS.ReadableStream;
  readonly stdout: NodeJS.WritableStream;
  readonly stderr: NodeJS.WritableStream;
  /** Where SIGINT is heard; `process` when absent. */
  readonly signals?: EventEmitter;
}

/** Parsed arguments by option and positional name; quantities and numbers are checked by their coercion. */
export type Arguments = Readonly<Record<string, unknown>>;

export interface Context {
  readonly streams: Streams;
  /** One line to stdout. */
  print(text: string): void;
  /** One line to stderr. */
  note(text: string): void;
  /** Style only where stdout is a terminal and NO_COLOR is unset. */
  readonly color: boolean;
  /** Columns of the terminal, or 100. */
  readonly columns: number;
}

/** What the registry knows without loading a command. */
export interface CommandEntry {
  readonly name: string;
  /** Positionals as yargs writes them: `<study>`, `[dir]`. */
  readonly positionals: string;
  readonly summary: string;
  load(): Promise<Command>;
}

export interface Command {
  /** Declares options, positionals and examples. */
  configure(yargs: Argv): Argv;
  run(args: Arguments, context: Context): Promise<ExitCode>;
}
