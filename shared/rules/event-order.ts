import type { EventKind } from '../contracts/events.ts';
import { stops } from './event-words.ts';

/** An event that stands in the registry, of one unit or one soft sensor. `at`: UTC, milliseconds since 1970. */
export interface StandingEvent {
  kind: EventKind;
  at: number;
}

/** What is to be recorded: one event, or a stop together with the start that ends it. */
export interface Occurrence {
  /** Line of a file; any number that tells occurrences apart. */
  line: number;
  kind: EventKind;
  at: number;
  /** Until when a stop lasted; null for all else, or while it lasts. */
  until: number | null;
}

/** Why something can't be recorded, and the field at fault. Instants in `figures` are UTC milliseconds. */
export interface EventProblem {
  code:
    | 'ahead'
    | 'before-1970'
    | 'until-without-stop'
    | 'until-not-after'
    | 'stopped-already'
    | 'stops-later'
    | 'started-already'
    | 'starts-later'
    | 'start-before-stop';
  field: 'at' | 'until';
  figures: Record<string, number>;
}

/** What becomes of one occurrence: `fresh` is added; with nothing fresh it is recorded already (or by line `as`). */
export interface Settled {
  fresh: StandingEvent[];
  problem: EventProblem | null;
  /** The line of the same file that records the same; null where the registry holds it. */
  as: number | null;
}

interface Switch extends StandingEvent {
  /** Null for what stands already. */
  of: Occurrence | null;
}

const aheadMs = 10 * 60_000;

/**
 * Can these times stand by themselves: not more than 10 minutes ahead, not before 1970, an end only for a stop and
 * after it?
 */
export function timeProblem({ kind, at, until }: Occurrence, now: number): EventProblem | null {
  const say = (code: EventProblem['code'], field: EventProblem['field'], figures = {}): EventProblem => ({
    code,
    field,
    figures,
  });
  if (at > now + aheadMs) return say('ahead', 'at', { at });
  if (at < 0) return say('before-1970', 'at', { at });
  if (until === null) return null;
  if (!stops(kind)) return say('until-without-stop', 'until');
  if (until <= at) return say('until-not-after', 'until', { at });
  return until > now + aheadMs ? say('ahead', 'until', { at: until }) : null;
}

/**
 * Settles what is to be recorded of one unit (or one soft sensor) against what stands. Stops and starts must take turns in
 * time, whatever the order in which they are given; what would break that is refused, what stands is never touched. The
 * same event is recorded once. A start that nothing precedes is taken only where no other stop or start stands.
 * @param standing what the registry holds of it
 * @returns by occurrence, in the order given
 */
export function settleEvents(
  occurrences: readonly Occurrence[],
  standing: readonly StandingEvent[],
  now: number,
): Map<Occurrence, Settled> {
  const settled = freshOf(occurrences, standing, now);
  for (;;) {
    const line = timelineOf(settled, standing);
    const found = firstConflict(line, standing.some(isSwitch));
    if (!found) return settled;
    const { occurrence, problem } = found;
    settled.set(occurrence, { fresh: [], problem, as: null });
  }
}

const keyOf = ({ kind, at }: StandingEvent): string => `${kind} ${at}`;
const isSwitch = ({ kind }: StandingEvent): boolean => kind === 'start' || stops(kind);

function freshOf(
  occurrences: readonly Occurrence[],
  standing: readonly StandingEvent[],
  now: number,
): Map<Occurrence, Settled> {
  const known = new Set(standing.map(keyOf));
  const byLine = new Map<string, number>();
  return new Map(
    occurrences.map((occurrence): [Occurrence, Settled] => {
      const problem = timeProblem(occurrence, now);
      if (problem) return [occurrence, { fresh: [], problem, as: null }];
      const { kind, at, until, line } = occurrence;
      const parts: StandingEvent[] = [{ kind, at }];
      if (until !== null) parts.push({ kind: 'start', at: until });
      const fresh = parts.filter((part) => !known.has(keyOf(part)) && !byLine.has(keyOf(part)));
      const as = fresh.length === 0 ? (byLine.get(keyOf(parts[0]!)) ?? null) : null;
      for (const part of fresh) byLine.set(keyOf(part), line);
      return [occurrence, { fresh, problem: null, as }];
    }),
  );
}

/** Stops and starts in time; of two at one instant the start comes first, as where one stop follows another. */
function timelineOf(settled: ReadonlyMap<Occurrence, Settled>, standing: readonly StandingEvent[]): Switch[] {
  const given = [...settled].flatMap(([of, { fresh }]) => fresh.map((event) => ({ ...event, of })));
  const all: Switch[] = [...standing.map((event) => ({ ...event, of: null })), ...given];
  return all.filter(isSwitch).sort((a, b) => a.at - b.at || Number(stops(a.kind)) - Number(stops(b.kind)));
}

function firstConflict(
  line: readonly Switch[],
  known: boolean,
): { occurrence: Occurrence; problem: EventProblem } | null {
  const first = line[0];
  if (known && first?.of && first.kind === 'start') {
    return { occurrence: first.of, problem: conflict('start-before-stop', first, { next: line[1]!.at }) };
  }
  for (const [index, later] of line.entries()) {
    const earlier = line[index - 1];
    if (!earlier || stops(earlier.kind) !== stops(later.kind)) continue;
    if (later.of) return { occurrence: later.of, problem: afterSame(earlier, later, line[index + 1]) };
    if (earlier.of) return { occurrence: earlier.of, problem: beforeSame(earlier, later) };
  }
  return null;
}

function conflict(
  code: EventProblem['code'],
  { of, kind }: Switch,
  figures: EventProblem['figures'],
): EventProblem {
  return { code, field: kind === 'start' && of!.kind !== 'start' ? 'until' : 'at', figures };
}

/** `later` is given and follows one of its own sort: it stops what stands, or starts what runs. */
function afterSame(earlier: Switch, later: Switch, next: Switch | undefined): EventProblem {
  const code = stops(later.kind) ? 'stopped-already' : 'started-already';
  return conflict(code, later, { since: earlier.at, ...(next && { next: next.at }) });
}

/** `earlier` is given and one of its own sort follows it, which stands. */
function beforeSame(earlier: Switch, later: Switch): EventProblem {
  const code = stops(earlier.kind) ? 'stops-later' : 'starts-later';
  const problem = conflict(code, earlier, { at: later.at });
  return code === 'stops-later' && earlier.of!.until !== null ? { ...problem, field: 'until' } : problem;
}
