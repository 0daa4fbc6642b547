const MINUTE_MS = 60_000;

/** A length of time as people say it: "40 s", "14 min", "2 h 05 min", "3 d 4 h". */
export function spanWords(spanMs: number): string {
  if (spanMs < MINUTE_MS) return `${Math.floor(spanMs / 1000)} s`;
  const minutes = Math.floor(spanMs / MINUTE_MS);
  if (minutes < 60) return `${minutes} min`;
  const hours = Math.floor(minutes / 60);
  if (hours < 24) return `${hours} h ${String(minutes % 60).padStart(2, "0")} min`;
  return `${Math.floor(hours / 24)} d ${hours % 24} h`;
}
