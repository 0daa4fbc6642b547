/** One payment as another payment's history sees it. */
export type PastPayment = {
  atMs: number;
  /** In minor units of the base currency; NaN where no rate was known. */
  amountBaseMinor: number;
  /** The other side: for an account its counterparty, for any other entity the account. */
  other: string;
  device: string | null;
  country: string | null;
  incoming: boolean;
  /** Breaks ties of the same millisecond; only where history is read for payments that are stored already. */
  id?: string | undefined;
};

/**
 * Payments of one account, card, device or counterparty in order of time. Columns instead of rows, because a batch
 * reads hundreds of thousands of them.
 */
export class Activity {
  readonly atMs: number[] = [];
  readonly amountsBaseMinor: number[] = [];
  readonly others: string[] = [];
  readonly devices: (string | null)[] = [];
  readonly countries: (string | null)[] = [];
  readonly incoming: boolean[] = [];
  private readonly ids: string[] = [];

  get length(): number {
    return this.atMs.length;
  }

  /** Behind every payment of the same or an earlier moment. Fast where payments come in order of time. */
  add(payment: PastPayment): void {
    const last = this.atMs.at(-1);
    const place = last === undefined || last <= payment.atMs ? this.length : this.endAt(payment.atMs);
    insert(this.atMs, place, payment.atMs);
    insert(this.amountsBaseMinor, place, payment.amountBaseMinor);
    insert(this.others, place, payment.other);
    insert(this.devices, place, payment.device);
    insert(this.countries, place, payment.country);
    insert(this.incoming, place, payment.incoming);
    if (payment.id !== undefined) insert(this.ids, place, payment.id);
  }

  /** How many payments lie at or before the moment: they are 0 … endAt − 1. */
  endAt(atMs: number): number {
    let low = 0;
    let high = this.length;
    while (low < high) {
      const middle = (low + high) >>> 1;
      if ((this.atMs[middle] as number) <= atMs) low = middle + 1;
      else high = middle;
    }
    return low;
  }

  /**
   * How many payments came before one that is among them, or would be: earlier ones, and of the same millisecond
   * those with a smaller id.
   */
  endBefore(atMs: number, id: string): number {
    let end = this.endAt(atMs);
    while (end > 0 && this.atMs[end - 1] === atMs && (this.ids[end - 1] ?? "") >= id) end--;
    return end;
  }
}

function insert<T>(list: T[], place: number, item: T): void {
  if (place === list.length) list.push(item);
  else list.splice(place, 0, item);
}
