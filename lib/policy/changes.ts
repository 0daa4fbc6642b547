type Leaf = string | number | boolean;
/** One term that differs; null where the other version has no such term. */
export type TermChange = { path: string; from: Leaf | null; to: Leaf | null };

/** The terms that differ between two versions of them, by their path: "channels.card_remote.onHold". */
export function termChanges(before: object, after: object): TermChange[] {
  const old = new Map(leavesOf(before));
  const fresh = new Map(leavesOf(after));
  const paths = [...new Set([...old.keys(), ...fresh.keys()])];
  return paths
    .map((path) => ({ path, from: old.get(path) ?? null, to: fresh.get(path) ?? null }))
    .filter(({ from, to }) => from !== to);
}

function leavesOf(value: object, prefix = ""): [string, Leaf][] {
  return Object.entries(value).flatMap(([key, inner]): [string, Leaf][] => {
    const path = prefix ? `${prefix}.${key}` : key;
    return typeof inner === "object" && inner !== null ? leavesOf(inner, path) : [[path, inner as Leaf]];
  });
}
