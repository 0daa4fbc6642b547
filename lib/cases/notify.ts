import "server-only";

/** Wakes what follows the cases in this process; other processes find out by polling the database. */
export type CaseListener = {
  casesChanged: (caseIds: readonly string[]) => void;
  casesRescored: (caseIds: readonly string[]) => void;
  labelsLearned: () => void;
};

// Pages, route handlers and instrumentation each have their own copy of a module; the listeners are one per process.
const shared = globalThis as typeof globalThis & { cupelCaseListeners?: Set<CaseListener> };
shared.cupelCaseListeners ??= new Set();
const listeners = shared.cupelCaseListeners;

export function listenToCases(listener: CaseListener): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}

/** Call after the commit that opened or changed the cases. */
export function casesChanged(caseIds: readonly string[]): void {
  if (caseIds.length === 0) return;
  for (const listener of listeners) listener.casesChanged(caseIds);
}

/** Call after the commit that gave waiting cases new vectors, however many: what people ask for comes before them. */
export function casesRescored(caseIds: readonly string[]): void {
  if (caseIds.length === 0) return;
  for (const listener of listeners) listener.casesRescored(caseIds);
}

/** Call after a commit that wrote to the label log and does not wait for what moved. */
export function labelsLearned(): void {
  for (const listener of listeners) listener.labelsLearned();
}
