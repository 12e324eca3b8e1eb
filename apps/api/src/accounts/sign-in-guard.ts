import { TooManyError } from '../http/errors';

interface Bucket {
  failures: number;
  /** When the next attempt is allowed, ms. */
  until: number;
  last: number;
}
interface Rule {
  /** Failures that cost nothing. */
  free: number;
  /** The wait after the first that does, ms; it doubles with each more … */
  first: number;
  /** … up to this, ms. */
  longest: number;
}
const PAIR: Rule = { free: 5, first: 1000, longest: 60_000 };
const ADDRESS: Rule = { free: 20, first: 1000, longest: 300_000 };
const ACCOUNT: Rule = { free: 10, first: 250, longest: 4000 };
/** A bucket that has been quiet this long is forgotten. */
const FORGET_MS = 30 * 60_000;

export interface SignInAttempt {
  address: string;
  /** In lower case, known or not. */
  email: string;
  /** Of the cookie by which this browser is known to belong to this account; null for a strange browser. */
  device: string | null;
}

/**
 * Slows guessing down. An address that keeps failing, on one account or many, is refused for a growing while. An account
 * that fails from everywhere is never refused, or a stranger could shut its owner out: its answers come late, by four
 * seconds at most. A browser that has signed in before is judged by its own failures alone, whatever strangers do.
 * Lives in memory: the API is one process, and a restart costs a guesser more than it gives.
 */
export class SignInGuard {
  private readonly buckets = new Map<string, Bucket>();

  constructor(
    private readonly now: () => number = Date.now,
    private readonly sleep: (ms: number) => Promise<void> = (ms) => new Promise((wake) => setTimeout(wake, ms)),
  ) {}

  /**
   * Lets an attempt through, late or not, or throws TooManyError. It counts as a failure until `succeeded`, so that
   * attempts sent all at once count all.
   */
  async admit(attempt: SignInAttempt): Promise<void> {
    this.sweep();
    const hard = this.hardRules(attempt);
    const wait = Math.max(0, ...hard.map(([name]) => (this.buckets.get(name)?.until ?? 0) - this.now()));
    if (wait > 0) {
      const seconds = Math.ceil(wait / 1000);
      throw new TooManyError(`Too many failed attempts from here. Try again in ${seconds} s.`, seconds);
    }
    for (const [name, rule] of hard) this.count(name, rule);
    if (attempt.device !== null) return;
    const late = this.count(`account ${attempt.email}`, ACCOUNT);
    if (late > 0) await this.sleep(late);
  }

  /** The attempt was good: what it counted for is taken back. */
  succeeded(attempt: SignInAttempt): void {
    const { address, email, device } = attempt;
    for (const name of device === null ? [`pair ${address} ${email}`] : [`device ${device}`]) this.buckets.delete(name);
    if (device !== null) return;
    // Others may be guessing still: of these two, only this attempt's own share is forgiven.
    for (const name of [`address ${address}`, `account ${email}`]) {
      const bucket = this.buckets.get(name);
      if (bucket) bucket.failures -= 1;
    }
  }

  private hardRules({ address, email, device }: SignInAttempt): [string, Rule][] {
    if (device !== null) return [[`device ${device}`, PAIR]];
    return [
      [`pair ${address} ${email}`, PAIR],
      [`address ${address}`, ADDRESS],
    ];
  }

  /** Counts one attempt; returns the wait it brings, ms. */
  private count(name: string, { free, first, longest }: Rule): number {
    const bucket = this.buckets.get(name) ?? { failures: 0, until: 0, last: 0 };
    bucket.failures += 1;
    bucket.last = this.now();
    const beyond = bucket.failures - free;
    const wait = beyond > 0 ? Math.min(first * 2 ** (beyond - 1), longest) : 0;
    bucket.until = this.now() + wait;
    this.buckets.set(name, bucket);
    return wait;
  }

  private sweep(): void {
    for (const [name, bucket] of this.buckets) if (this.now() - bucket.last > FORGET_MS) this.buckets.delete(name);
  }
}
