import { type Role } from '@halfdeep/contracts';

/** The person behind a request, as the desk database knew them when it arrived. */
export interface Actor {
  id: string;
  name: string;
  email: string;
  roles: readonly Role[];
  sessionId: string;
  /** When the session ends if nothing renews it. */
  sessionExpiresAt: Date;
}

/** Who asks, and from where. */
export interface Caller {
  /** Null: nobody is signed in. */
  actor: Actor | null;
  address: string;
}

/** What an action is about, as far as the policy needs to know. */
export interface PolicySubject {
  ownerId?: string | null;
  state?: string;
  /** Names it in refusals: "run", "experiment", "person". */
  noun?: string;
}
