import type { Label } from "../scorer";

export type LabelledPayment = { atMs: number; label: Label; transactionId: string };

/** Known labels of one entity's payments. */
export class LabelledPast {
  private readonly payments: LabelledPayment[] = [];

  get isEmpty(): boolean {
    return this.payments.length === 0;
  }

  add(payment: LabelledPayment): void {
    this.payments.push(payment);
  }

  /** How many payments of the window (atMs − windowMs, atMs] are known as fraudulent and as legitimate; not the payment itself. */
  count(atMs: number, windowMs: number, exceptId?: string): { fraudulent: number; legitimate: number } {
    let fraudulent = 0;
    let legitimate = 0;
    for (const payment of this.payments) {
      if (payment.atMs > atMs || payment.atMs <= atMs - windowMs || payment.transactionId === exceptId)
        continue;
      if (payment.label === 1) fraudulent++;
      else legitimate++;
    }
    return { fraudulent, legitimate };
  }
}
