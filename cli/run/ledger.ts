import { type FileHandle, open } from 'node:fs/promises';
import type { LedgerEntry, LedgerHeader } from './ledger-format.js';
import { fileError } from './user-error.js';

/** Append-only record of a run: each line is on the disk before anything depends on it. */
export class Ledger<Entry extends object = LedgerEntry> {
  readonly #file: FileHandle;
  readonly #path: string;
  /** Workers end when they like: lines must not run into each other. */
  #queue: Promise<void> = Promise.resolve();

  private constructor(file: FileHandle, path: string) {
    this.#file = file;
    this.#path = path;
  }

  /** A new ledger in place of whatever was there. */
  static async begin<E extends object = LedgerEntry>(path: string, header: LedgerHeader): Promise<Ledger<E>> {
    const ledger = await Ledger.#open<E>(path, 'w');
    await ledger.#line(header);
    return ledger;
  }

  /** Goes on after the first `sound` bytes; the rest, a torn line, is cut off. */
  static async continue<E extends object = LedgerEntry>(path: string, sound: number): Promise<Ledger<E>> {
    const ledger = await Ledger.#open(path, 'r+');
    await ledger.#file.truncate(sound);
    await ledger.#file.close();
    return Ledger.#open<E>(path, 'a');
  }

  static async #open<E extends object>(path: string, flags: string): Promise<Ledger<E>> {
    try {
      return new Ledger<E>(await open(path, flags), path);
    } catch (error) {
      throw fileError(error, path);
    }
  }

  append(entry: Entry): Promise<void> {
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
