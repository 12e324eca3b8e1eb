/** Who owns a run that waits; the list is in queue order. */
export interface WaitingRun {
  id: string;
  ownerId: string;
}

/**
 * Where a new waiting run of `ownerId` belongs in `waiting` (an index, 0 … length), fair between owners: each run counts
 * as its owner's first, second, … turn (runs that compute now count first), and a new run goes before the runs of a
 * later turn than its own, but never before another of its owner. An order made by an admin stays as it is.
 */
export function fairPlace(
  waiting: readonly WaitingRun[],
  ownerId: string,
  runningByOwner: ReadonlyMap<string, number>,
): number {
  const turns = new Map(runningByOwner);
  const turnOf = waiting.map((run) => {
    const turn = (turns.get(run.ownerId) ?? 0) + 1;
    turns.set(run.ownerId, turn);
    return turn;
  });
  const own = (turns.get(ownerId) ?? 0) + 1;
  let place = waiting.length;
  while (place > 0 && waiting[place - 1].ownerId !== ownerId && turnOf[place - 1] > own) place--;
  return place;
}

/** The waiting ids in the order an admin asked for: named ids first, the rest behind them in their old order. */
export function wantedOrder(waiting: readonly string[], wanted: readonly string[]): string[] {
  const known = new Set(waiting);
  const first = [...new Set(wanted)].filter((id) => known.has(id));
  const named = new Set(first);
  return [...first, ...waiting.filter((id) => !named.has(id))];
}
