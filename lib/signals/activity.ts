const FIRST_CAPACITY = 16;

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
  id?: string;
};

/**
 * Payments of one account, card, device or counterparty in order of time, as parallel arrays: a batch reads
 * hundreds of thousands of them.
 */
export class Activity {
  length = 0;
  private at = new Float64Array(FIRST_CAPACITY);
  private amount = new Float64Array(FIRST_CAPACITY);
  private incoming = new Uint8Array(FIRST_CAPACITY);
  readonly others: string[] = [];
  readonly devices: (string | null)[] = [];
  readonly countries: (string | null)[] = [];
  private readonly ids: (string | undefined)[] = [];

  /** Behind every payment of the same or an earlier moment. Fast where payments come in order of time. */
  add(payment: PastPayment): void {
    if (this.length === this.at.length) this.grow();
    const last = this.length - 1;
    const place = last < 0 || this.atMs(last) <= payment.atMs ? this.length : this.endAt(payment.atMs);
    this.at.copyWithin(place + 1, place, this.length);
    this.amount.copyWithin(place + 1, place, this.length);
    this.incoming.copyWithin(place + 1, place, this.length);
    this.at[place] = payment.atMs;
    this.amount[place] = payment.amountBaseMinor;
    this.incoming[place] = payment.incoming ? 1 : 0;
    insert(this.others, place, payment.other);
    insert(this.devices, place, payment.device);
    insert(this.countries, place, payment.country);
    insert(this.ids, place, payment.id);
    this.length++;
  }

  atMs(index: number): number {
    return this.at[index] as number;
  }

  amountBaseMinor(index: number): number {
    return this.amount[index] as number;
  }

  isIncoming(index: number): boolean {
    return this.incoming[index] === 1;
  }

  /** How many payments lie at or before the moment: they are 0 … endAt − 1. */
  endAt(atMs: number): number {
    let low = 0;
    let high = this.length;
    while (low < high) {
      const middle = (low + high) >>> 1;
      if (this.atMs(middle) <= atMs) low = middle + 1;
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
    while (end > 0 && this.atMs(end - 1) === atMs && (this.ids[end - 1] ?? "") >= id) end--;
    return end;
  }

  private grow(): void {
    const capacity = this.at.length * 2;
    const at = new Float64Array(capacity);
    const amount = new Float64Array(capacity);
    const incoming = new Uint8Array(capacity);
    at.set(this.at);
    amount.set(this.amount);
    incoming.set(this.incoming);
    this.at = at;
    this.amount = amount;
    this.incoming = incoming;
  }
}

function insert<T>(list: T[], place: number, item: T): void {
  if (place === list.length) list.push(item);
  else list.splice(place, 0, item);
}
