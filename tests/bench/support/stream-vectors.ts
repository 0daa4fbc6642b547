import { Activity } from "@/lib/signals/activity";
import { CATALOGUE, DIMENSION, OFFSETS } from "@/lib/signals/catalogue";
import type { PaymentFields, PaymentHistory } from "@/lib/signals/facts";
import { KnownHistory } from "@/lib/signals/known-history";
import { labelSignals } from "@/lib/signals/label-signals";
import { LabelledPast } from "@/lib/signals/labelled-past";
import { vectorOf } from "@/lib/signals/vectors";
import type { StreamPayment } from "./stream-payments";

/** Known labels of the accounts and counterparties of one run through the stream. */
export class StreamLabels {
  readonly accounts = new Map<string, LabelledPast>();
  readonly counterparties = new Map<string, LabelledPast>();

  add({ atMs, externalId, accountId, counterpartyId, isFraud }: StreamPayment): void {
    const label = { atMs, label: isFraud ? 1 : -1, transactionId: externalId } as const;
    pastOf(this.accounts, accountId).add(label);
    pastOf(this.counterparties, counterpartyId).add(label);
  }
}

/**
 * The product's own signals of a whole stream. Those that no label enters are measured once; those of known labels
 * follow the labels of the run, measured by the same code.
 */
export class StreamVectors {
  private readonly unlabelled: Float64Array;
  /** Coordinates from here to the bias are the signals of known labels, which the catalogue holds last. */
  private readonly labelsFrom: number;

  constructor(readonly payments: readonly StreamPayment[]) {
    const first = CATALOGUE.findIndex((signal) => labelSignals.includes(signal));
    if (CATALOGUE.slice(first).some((signal) => !labelSignals.includes(signal))) {
      throw new Error("The signals of known labels no longer stand last in the catalogue");
    }
    this.labelsFrom = OFFSETS[first] as number;
    this.unlabelled = measureWithoutLabels(payments);
  }

  /** The vector of the payment at this index, given what labels are known: the one scored at arrival. */
  of(index: number, labels: StreamLabels): Float64Array {
    const vector = this.unlabelled.slice(index * DIMENSION, (index + 1) * DIMENSION);
    const payment = this.payments[index] as StreamPayment;
    const ofAccount = labels.accounts.get(payment.accountId);
    const ofCounterparty = labels.counterparties.get(payment.counterpartyId);
    if (!ofAccount && !ofCounterparty) return vector;
    const measured = vectorOf(fieldsOf(payment), {
      ...NO_ENTITIES,
      account: { activity: NO_ACTIVITY, labels: ofAccount ?? NO_LABELS },
      counterparty: { activity: NO_ACTIVITY, labels: ofCounterparty ?? NO_LABELS },
    }).vector;
    vector.set(measured.subarray(this.labelsFrom), this.labelsFrom);
    return vector;
  }
}

const NO_ACTIVITY = new Activity();
const NO_LABELS = new LabelledPast();
const NO_ENTITIES: PaymentHistory = { account: null, card: null, device: null, counterparty: null };

/** In order of time, each payment history to those after it, as the intake of one endless batch. */
function measureWithoutLabels(payments: readonly StreamPayment[]): Float64Array {
  const vectors = new Float64Array(payments.length * DIMENSION);
  const traces = payments.map(traceOf);
  const history = new KnownHistory(traces);
  payments.forEach((payment, index) => {
    const trace = traces[index] as ReturnType<typeof traceOf>;
    vectors.set(vectorOf(fieldsOf(payment), history.of(trace)).vector, index * DIMENSION);
    history.add(trace);
  });
  return vectors;
}

function traceOf(payment: StreamPayment) {
  return { ...fieldsOf(payment), accountId: payment.accountId };
}

function fieldsOf({ atMs, amountMinor, counterpartyId }: StreamPayment): PaymentFields {
  return {
    occurredAtMs: atMs,
    amountBaseMinor: amountMinor,
    direction: "outgoing",
    channel: "card_present",
    remote: null,
    counterpartyId,
    cardRef: null,
    deviceId: null,
    counterpartyCountry: null,
    accountCountry: null,
    authentication: null,
    accountOpenedAtMs: null,
    upstreamScore: null,
    ruleHits: null,
  };
}

function pastOf(pasts: Map<string, LabelledPast>, key: string): LabelledPast {
  const known = pasts.get(key);
  if (known) return known;
  const past = new LabelledPast();
  pasts.set(key, past);
  return past;
}
