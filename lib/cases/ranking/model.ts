import "server-only";
import type { Database } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { Breath } from "../../breath";
import { type HeldScorer, readScorerInUse } from "../../learning/held-scorer";
import { log } from "../../log";
import type { Label, Step } from "../../scorer";
import { padVector } from "../../signals/signal-set";
import { advance, recompute } from "./advance";
import { ChangeWatch } from "./change-watch";
import { type CaseDelta, readDelta } from "./delta";
import { actsOf, leadingTo, MOST_STEPS } from "./label-acts";
import { KeptMovements, type Movement } from "./movement";
import { PolicyWatch } from "./policy-watch";
import {
  countWaiting,
  type LoggedLabel,
  readChangedAmong,
  readPlaced,
  readScorerNews,
  readWaitingIds,
} from "./read-waiting";
import { Turns } from "./turns";
import { RankingView } from "./view";
import { WaitingCases } from "./waiting-cases";

/** Rows are turned into cases without a pause, page by page. */
const PAGE = 200;
/** Room for so many times the cases that wait at the start: moving all vectors into a larger array takes a while. */
const ROOM = 1.25;
/** Of those that wait behind, so many are looked at in one run. */
const MOST_LATER = 64;

export type RankingEvent = { version: number; logSeq: number; changes: readonly CaseDelta[] };

/**
 * The ranking of waiting cases of one database, in this process's memory: a read model, never the truth. It is
 * brought forward from the label log and from the cases' numbers and times of change, so that every process comes to the same
 * order by itself. Nobody sees it half-way: changes and reads take turns.
 */
export class RankingModel {
  private readonly updates = new Turns();
  private readonly state = new Turns();
  private readonly listeners = new Set<(event: RankingEvent) => void>();
  private readonly hinted = new Set<string>();
  /** Cases with a new vector that wait for their turn behind those that somebody asked for. */
  private later: string[] = [];
  private readonly movements = new KeptMovements();
  private pending: Promise<void> | null = null;
  private owed: Promise<void> | null = null;
  private pollWanted = false;
  private loaded: { cases: WaitingCases; held: HeldScorer; watch: ChangeWatch } | null = null;
  private readonly policy = new PolicyWatch();
  private view: RankingView | null = null;
  private isFrozen = false;

  constructor(private readonly db: Database) {}

  /** Rises with every label, undo, correction and change of the scorer's options; 0 before the first load. */
  get version(): number {
    return this.loaded?.held.version ?? 0;
  }

  get logSeq(): number {
    return this.loaded?.held.logSeq ?? 0;
  }

  subscribe(listener: (event: RankingEvent) => void): () => void {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  /**
   * Hands the ranking to `use`, whole and at rest; what it returns must not hold on to the view.
   * While everything is computed anew, the ranking as it was before is handed out.
   */
  async read<T>(now: Date, use: (view: RankingView) => T): Promise<T> {
    if (!this.loaded) await this.catchUp();
    if (this.isFrozen && this.view) return use(this.view);
    // What this process has changed itself is seen by its next read; a failure has been told to whoever changed it.
    await this.owed?.catch(() => undefined);
    return this.state.take(async () => use(await this.viewAt(now)));
  }

  /**
   * Takes in what has changed since: the named cases and the label log, and with `poll` whatever changed lately.
   * Calls that come before a run has begun share it.
   */
  catchUp(caseIds: readonly string[] = [], poll = false): Promise<void> {
    for (const id of caseIds) this.hinted.add(id);
    this.pollWanted ||= poll;
    this.pending ??= this.updates.take(() => {
      this.pending = null;
      return this.bringForward();
    });
    if (caseIds.length > 0) this.owed = this.pending;
    return this.pending;
  }

  /** As `catchUp`, but a few at a time and behind whatever somebody waits for. */
  takeInLater(caseIds: readonly string[]): void {
    this.later.push(...caseIds);
    this.goOnSoon();
  }

  /** What moved when the scorer came to this version; null when nobody counted it here. */
  movementOf(version: number): Movement | null {
    return this.movements.of(version);
  }

  private async viewAt(now: Date): Promise<RankingView> {
    if (this.view?.isGoodAt(now)) return this.view;
    const { cases, held, policy } = this.present();
    this.view = await RankingView.of(cases, held, policy.inForce, policy.thresholds, now);
    return this.view;
  }

  private async bringForward(): Promise<void> {
    const now = new Date();
    const hinted = [...this.hinted];
    const poll = this.pollWanted;
    this.hinted.clear();
    this.pollWanted = false;
    try {
      // A look is due often enough; whoever waits for a decision's effect need not wait for the policy as well.
      if (poll || !this.loaded) await this.refreshPolicy(now);
      if (!this.loaded) return await this.load(now);
      const { cases, watch, held } = this.loaded;
      const turn = this.later.slice(0, MOST_LATER);
      const [news, named, behind] = await Promise.all([
        readScorerNews(this.db, held.logSeq, MOST_STEPS + 1),
        readChangedAmong(this.db, hinted),
        readChangedAmong(this.db, turn),
      ]);
      const labels = leadingTo(news, held);
      const fresh = labels ? null : await readScorerInUse(this.db);
      if (fresh && !isOfSameShape(fresh, held)) return await this.load(now);
      // A decided case leaves before the others move, whoever decided it.
      const decided = (labels ?? []).flatMap(({ caseId }) => caseId ?? []);
      named.push(...(await readChangedAmong(this.db, without(decided, hinted))));
      const look = poll ? await watch.look(this.db, now) : null;
      const delta = await readDelta(this.db, cases, named, [...behind, ...(look?.rows ?? [])]);
      await this.state.take(() => this.apply(delta.changes, labels ?? [], fresh));
      if (look) watch.settle(look);
      this.later = [...new Set([...this.later.slice(turn.length), ...delta.left])];
      if (this.later.length > 0) this.goOnSoon();
    } catch (error) {
      for (const id of hinted) this.hinted.add(id);
      this.pollWanted ||= poll;
      throw error;
    }
  }

  private goOnSoon(): void {
    setImmediate(() => {
      this.catchUp().catch((error) => log.error({ err: error }, "The ranking could not be brought forward"));
    });
  }

  private async load(now: Date): Promise<void> {
    const held = await readScorerInUse(this.db);
    const watch = await ChangeWatch.begin(this.db, now);
    const cases = new WaitingCases(held.scorer, Math.ceil(ROOM * (await countWaiting(this.db))));
    const breath = new Breath();
    for (let after = 0; ; ) {
      const page = await readWaitingIds(this.db, after, PAGE);
      const last = page.at(-1);
      if (!last) break;
      after = last.number;
      for (const { facts, vector } of await readPlaced(
        this.db,
        page.map(({ id }) => id),
      )) {
        cases.place(facts, fitting(vector, held), held.scorer);
        await breath.take();
      }
    }
    await this.state.take(() => {
      this.loaded = { cases, held, watch };
      this.view = null;
    });
    this.tell([]);
    // What changed while the pages were read.
    void this.catchUp([], true).catch((error) =>
      log.error({ err: error }, "The ranking could not be brought forward"),
    );
  }

  private async apply(
    delta: CaseDelta[],
    labels: readonly LoggedLabel[],
    fresh: HeldScorer | null,
  ): Promise<void> {
    if (delta.length === 0 && labels.length === 0 && !fresh) return;
    const { cases, held } = this.present();
    try {
      for (const { caseId, after } of delta) if (!after) cases.remove(caseId);
      this.view = null;
      if (fresh) await this.startAfresh(fresh);
      else for (const act of actsOf(labels)) await this.learn(act, held);
      const { scorer } = this.present().held;
      const breath = new Breath();
      for (const { after } of delta) {
        if (after?.vector) cases.place(after.facts, fitting(after.vector, held), scorer);
        else if (after) cases.update(after.facts);
        await breath.take();
      }
    } catch (error) {
      // Half-way is nowhere: the next run loads everything again.
      this.loaded = null;
      throw error;
    } finally {
      this.view = null;
    }
    this.tell(delta);
  }

  private async learn(act: readonly LoggedLabel[], held: HeldScorer): Promise<void> {
    const { cases, policy } = this.present();
    const steps: Step[] = [];
    for (const { vector, label, weight, seq, scorerVersion } of act) {
      steps.push(held.scorer.learn(bytesToVector(vector), label as Label, weight).step);
      held.logSeq = seq;
      held.version = scorerVersion;
    }
    const movement = steps.every((step) => step.exact)
      ? await advance(cases, steps, policy.thresholds.holdLogit)
      : await this.computeAnew(held);
    this.movements.keep(held.version - act.length + 1, held.version, movement);
  }

  /** After an undo, a correction or other options the scorer's state comes from the database. */
  private async startAfresh(fresh: HeldScorer): Promise<void> {
    const { cases, held, watch } = this.present();
    this.movements.keep(held.version + 1, fresh.version, await this.computeAnew(fresh));
    this.loaded = { cases, held: fresh, watch };
  }

  private async computeAnew({ scorer }: HeldScorer): Promise<Movement> {
    const { cases, policy } = this.present();
    await this.viewAt(new Date());
    this.isFrozen = true;
    try {
      return await recompute(cases, scorer, policy.thresholds.holdLogit);
    } finally {
      this.isFrozen = false;
    }
  }

  private present() {
    if (!this.loaded) throw new Error("The ranking is not loaded");
    return { ...this.loaded, policy: this.policy.present() };
  }

  private async refreshPolicy(now: Date): Promise<void> {
    if (!(await this.policy.refresh(this.db, now)) || !this.loaded) return;
    await this.state.take(() => {
      this.view = null;
    });
    this.tell([]);
  }

  private tell(changes: readonly CaseDelta[]): void {
    const event = { version: this.version, logSeq: this.logSeq, changes };
    for (const listener of this.listeners) listener(event);
  }
}

const without = (ids: readonly string[], others: readonly string[]) =>
  ids.filter((id) => !others.includes(id));

const isOfSameShape = (one: HeldScorer, other: HeldScorer) =>
  one.signalSetVersion === other.signalSetVersion &&
  one.scorer.dimension === other.scorer.dimension &&
  one.scorer.reading().parts.length === other.scorer.reading().parts.length;

/** A case may wait with the vector of an earlier set of signals until it is scored anew. */
const fitting = (vector: Float64Array, { signals }: HeldScorer) => padVector(signals, vector);
