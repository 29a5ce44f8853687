import type { Quality } from '../../../shared/rules/history-values.ts';

const hourMs = 3_600_000;

/** What a batch holds of one tag. */
export interface TagPart {
  tagId: number;
  count: number;
  firstMs: number;
  lastMs: number;
  /** Hours since 1970 that hold a reading. */
  hours: Set<number>;
}

/**
 * Readings on their way into the database, in columns: a chunk of 200,000 is a few megabytes and no objects.
 */
export class Batch {
  readonly parts: TagPart[] = [];
  size = 0;
  /** Every tag's readings came in the order of time, none twice. */
  ascending = true;
  private slots = new Int32Array(0);
  private times = new Float64Array(0);
  private values = new Float64Array(0);
  private qualities = new Uint8Array(0);
  private readonly slotOf = new Map<number, number>();
  private readonly lastHours: number[] = [];

  add(tagId: number, atMs: number, value: number, quality: Quality): void {
    if (this.size === this.slots.length) this.grow();
    const slot = this.slotOf.get(tagId) ?? this.open(tagId);
    const part = this.parts[slot]!;
    const at = this.size++;
    this.slots[at] = slot;
    this.times[at] = atMs;
    this.values[at] = value;
    this.qualities[at] = quality;
    part.count++;
    if (atMs > part.lastMs) part.lastMs = atMs;
    else this.ascending = false;
    if (atMs < part.firstMs) part.firstMs = atMs;
    const hour = Math.floor(atMs / hourMs);
    if (hour === this.lastHours[slot]) return;
    this.lastHours[slot] = hour;
    part.hours.add(hour);
  }

  /** Visits every reading, tag by tag and within a tag as they came: near the order of the key, which inserts faster. */
  forEachByTag(
    visit: (tagId: number, atMs: number, value: number, quality: number, order: number) => void,
  ): void {
    const places = new Int32Array(this.parts.length);
    for (let slot = 1; slot < places.length; slot++)
      places[slot] = places[slot - 1]! + this.parts[slot - 1]!.count;
    const sorted = new Int32Array(this.size);
    for (let at = 0; at < this.size; at++) sorted[places[this.slots[at]!]!++] = at;
    for (const at of sorted) {
      visit(this.parts[this.slots[at]!]!.tagId, this.times[at]!, this.values[at]!, this.qualities[at]!, at);
    }
  }

  /** First instants of the months (UTC) that hold readings. */
  months(): number[] {
    const months = new Set<number>();
    for (const { hours } of this.parts) {
      for (const hour of hours) {
        const date = new Date(hour * hourMs);
        months.add(Date.UTC(date.getUTCFullYear(), date.getUTCMonth()));
      }
    }
    return [...months].sort((a, b) => a - b);
  }

  clear(): void {
    this.size = 0;
    this.ascending = true;
    this.parts.length = 0;
    this.lastHours.length = 0;
    this.slotOf.clear();
  }

  private open(tagId: number): number {
    const slot = this.parts.length;
    this.slotOf.set(tagId, slot);
    this.lastHours.push(-1);
    this.parts.push({ tagId, count: 0, firstMs: Infinity, lastMs: -Infinity, hours: new Set() });
    return slot;
  }

  private grow(): void {
    const capacity = Math.max(16_384, this.slots.length * 2);
    const larger = <T extends Int32Array | Float64Array | Uint8Array>(made: T, old: T): T => {
      made.set(old);
      return made;
    };
    this.slots = larger(new Int32Array(capacity), this.slots);
    this.times = larger(new Float64Array(capacity), this.times);
    this.values = larger(new Float64Array(capacity), this.values);
    this.qualities = larger(new Uint8Array(capacity), this.qualities);
  }
}
