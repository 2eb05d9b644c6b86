import { type ChildProcessWithoutNullStreams, spawn } from 'node:child_process';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import type { Design } from '../../core/index.js';

/** Figures of the peer's tight run, against which both sides' errors are measured. */
export interface PeerFigures {
  readonly mean: number;
  readonly factorial2: number;
  readonly p: readonly number[];
  readonly multiphoton: number;
}

export interface Prepared {
  readonly key: number;
  /** Loosest relative tolerance that meets the promised accuracy. */
  readonly tolerance: number;
  readonly error: { readonly p: number; readonly relative: number };
  readonly exact: PeerFigures;
}

/** A SciPy process that answers JSON lines, one request at a time. */
export class Peer {
  readonly #child: ChildProcessWithoutNullStreams;
  readonly #lines: AsyncIterator<string>;

  constructor(python: string) {
    const script = fileURLToPath(new URL('./lsoda.py', import.meta.url));
    // One thread: a BLAS that spreads over the cores would not be the same job.
    const env = { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' };
    this.#child = spawn(python, [script], { env });
    this.#child.stderr.pipe(process.stderr);
    this.#lines = createInterface({ input: this.#child.stdout })[Symbol.asyncIterator]();
  }

  async #ask<T>(request: unknown): Promise<T> {
    this.#child.stdin.write(`${JSON.stringify(request)}\n`);
    const { value, done } = await this.#lines.next();
    if (done) throw new Error('the SciPy peer ended');
    return JSON.parse(value) as T;
  }

  prepare(design: Design, moments: number): Promise<Prepared> {
    return this.#ask({ prepare: design, moments });
  }

  /** Seconds of one evaluation. */
  async run(key: number): Promise<number> {
    return (await this.#ask<{ seconds: number }>({ run: key })).seconds;
  }

  close(): void {
    this.#child.stdin.end();
  }
}
