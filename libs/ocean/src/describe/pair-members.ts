/** A member of a named list of a setup; names may be empty and, for wind components and islands, repeated. */
export interface Member {
  name?: string;
  kind?: string;
  /** A sponge is named by its edge. */
  edge?: string;
}

/** What a member is called: its name, which may be empty; a sponge "west sponge". */
export function nameOf(member: Member): string {
  return member.name ?? (member.edge === undefined ? '' : `${member.edge} sponge`);
}

/**
 * Which member of `a` became which member of `b`, as index pairs in the order of `b`: first by name (the k-th of a name
 * with the k-th of that name), then renamed ones by equal content, then by equal position and kind.
 */
export function pairMembers(a: readonly Member[], b: readonly Member[]): [number, number][] {
  const freeA = new Set(a.keys());
  const freeB = new Set(b.keys());
  const pairs: [number, number][] = [];
  const pairWhere = (alike: (i: number, j: number) => boolean) => {
    for (const j of [...freeB]) {
      const i = [...freeA].find((candidate) => alike(candidate, j));
      if (i === undefined) continue;
      freeA.delete(i);
      freeB.delete(j);
      pairs.push([i, j]);
    }
  };
  pairWhere((i, j) => nameOf(a[i]) !== '' && nameOf(a[i]) === nameOf(b[j]));
  pairWhere((i, j) => content(a[i]) === content(b[j]));
  pairWhere((i, j) => i === j && kindOf(a[i]) === kindOf(b[j]));
  return pairs.sort(([, j], [, k]) => j - k);
}

function content(member: Member): string {
  return JSON.stringify({ ...member, name: '', edge: '' });
}

function kindOf(member: Member & { pattern?: { kind: string }; along?: string }): string {
  return member.pattern?.kind ?? member.kind ?? member.along ?? '';
}
