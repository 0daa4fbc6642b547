/** Apart from the catalogue's keys, which never begin so. */
const PREFIX = "own_";
const LONGEST = 40;

/** A key from a name: "Loyal & large" → own_loyal_large, or with a number behind where that is taken. */
export function ownKey(name: string, taken: ReadonlySet<string>): string {
  const words = name
    .normalize("NFKD")
    .toLowerCase()
    .replace(/[\u0300-\u036f]/g, "")
    .split(/[^a-z0-9]+/)
    .filter((word) => word !== "");
  const base = `${PREFIX}${words.join("_") || "signal"}`.slice(0, LONGEST).replace(/_$/, "");
  for (let n = 1; ; n++) {
    const key = n === 1 ? base : `${base}_${n}`;
    if (!taken.has(key)) return key;
  }
}
