/**
 * A bounded memo by content: a value depends on nothing but its key, so whether it is found or made again cannot change
 * any result. The least recently used goes first.
 */
export class Memo<T> {
  private readonly held = new Map<string, T>();

  constructor(private readonly most: number) {}

  get(key: string, make: () => T): T {
    const found = this.held.get(key);
    const value = found ?? make();
    this.held.delete(key);
    this.held.set(key, value);
    if (this.held.size > this.most) {
      for (const oldest of this.held.keys()) {
        this.held.delete(oldest);
        break;
      }
    }
    return value;
  }
}
