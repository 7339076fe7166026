/**
 * Remembers what was made for a key, up to a number of entries and of bytes; the one made longest ago goes first. The
 * keys are hashes of content, so that what is remembered is what would be made again.
 */
export class BoundedCache<T> {
  private readonly store = new Map<string, { readonly value: T; readonly bytes: number }>();
  private held = 0;

  constructor(
    private readonly mostEntries: number,
    private readonly mostBytes: number,
    private readonly bytesOf: (value: T) => number
  ) {}

  get(key: string, make: () => T): T {
    const known = this.store.get(key);
    if (known !== undefined) return known.value;
    const value = make();
    const bytes = this.bytesOf(value);
    for (const [oldest, entry] of this.store) {
      if (this.store.size < this.mostEntries && this.held + bytes <= this.mostBytes) break;
      this.store.delete(oldest);
      this.held -= entry.bytes;
    }
    this.store.set(key, { value, bytes });
    this.held += bytes;
    return value;
  }

  get size(): number {
    return this.store.size;
  }

  get bytes(): number {
    return this.held;
  }
}
