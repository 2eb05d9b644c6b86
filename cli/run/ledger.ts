import { type FileHandle, open } from 'node:fs/promises';
import type { LedgerEntry, LedgerHeader } from './ledger-format.js';
import { fileError } from './user-error.js';

/** Append-only record of a run: each line is on the disk before anything depends on it. */
export class Ledger {
  readonly #file: FileHandle;
  readonly #path: string;
  /** Workers end when they like: lines must not run into each other. */
  #queue: Promise<void> = Promise.resolve();

  private constructor(file: FileHandle, path: string) {
    this.#file = file;
    this.#path = path;
  }

  /** A new ledger in place of whatever was there. */
  static async begin(path: string, header: LedgerHeader): Promise<Ledger> {
    const ledger = await Ledger.#open(path, 'w');
    await ledger.#line(header);
    return ledger;
  }

  /** Goes on after the first `sound` bytes; the rest, a torn line, is cut off. */
  static async continue(path: string, sound: number): Promise<Ledger> {
    const ledger = await Ledger.#open(path, 'r+');
    await ledger.#file.truncate(sound);
    await ledger.#file.close();
    return Ledger.#open(path, 'a');
  }

  static async #open(path: string, flags: string): Promise<Ledger> {
    try {
      return new Ledger(await open(path, flags), path);
    } catch (error) {
      throw fileError(error, path);
    }
  }

  append(entry: LedgerEntry): Promise<void> {
    this.#queue = this.#queue.then(() => this.#line(entry));
    return this.#queue;
  }

  async #line(value: unknown): Promise<void> {
    try {
      await this.#file.appendFile(`${JSON.stringify(value)}\n`);
      await this.#file.datasync();
    } catch (error) {
      throw fileError(error, this.#path);
    }
  }

  async close(): Promise<void> {
    await this.#queue.catch(() => undefined);
    await this.#file.close();
  }
}
