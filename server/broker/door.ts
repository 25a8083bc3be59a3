import { randomBytes, timingSafeEqual } from "node:crypto";
import type { PublisherStore } from "../people/publisher-store.ts";
import { afterFailure, type Failures, waitLeft } from "../people/throttle.ts";
import type { Peer } from "./rights.ts";

/** Sign-ins that are looked at one after the other: each costs 32 MB and some tens of milliseconds on purpose. */
const mostWaiting = 20;
/** Names and addresses whose failures are remembered. */
const mostRemembered = 1000;

/** What a connection shows to be let in. */
export interface Shown {
  name: string | undefined;
  secret: Uint8Array | undefined;
  /** where from */
  address: string;
}

/** `busy`: not looked at, to be tried again later. */
export type Answer = { kind: "welcome"; peer: Peer } | { kind: "refused" } | { kind: "busy" };

/** The embedded broker's door: who is it that connects? While no publisher has been added it asks nobody. */
export class Door {
  readonly #publishers: PublisherStore;
  readonly #failures = new Map<string, Failures>();
  #waiting = 0;
  #last: Promise<unknown> = Promise.resolve();
  /** how this service's own engine signs in: made anew at every start, and kept nowhere */
  readonly own = { username: "millrace-engine", password: randomBytes(32).toString("base64url") };

  constructor(publishers: PublisherStore) {
    this.#publishers = publishers;
  }

  /** Does everybody who connects have to sign in? */
  get asks(): boolean {
    return !this.#publishers.isEmpty();
  }

  async open({ name, secret, address }: Shown): Promise<Answer> {
    if (name === this.own.username) {
      return this.#isOwn(secret) ? { kind: "welcome", peer: { kind: "service" } } : { kind: "refused" };
    }
    if (!this.asks) return { kind: "welcome", peer: { kind: "anyone" } };
    if (name === undefined || secret === undefined) return { kind: "refused" };
    const who = `${address} ${name}`;
    if (this.#waiting >= mostWaiting || waitLeft(this.#failures.get(who), Date.now()) > 0) return { kind: "busy" };
    const publisher = await this.#inTurn(() => this.#publishers.check(name, Buffer.from(secret).toString("utf8")));
    if (publisher) {
      this.#failures.delete(who);
      return { kind: "welcome", peer: { kind: "publisher", ...publisher } };
    }
    if (this.#failures.size >= mostRemembered) this.#failures.clear();
    this.#failures.set(who, afterFailure(this.#failures.get(who), Date.now()));
    return { kind: "refused" };
  }

  /** What this peer may do now: undefined when it has been removed, or when from now on everybody must sign in. */
  again(peer: Peer): Peer | undefined {
    switch (peer.kind) {
      case "service":
        return peer;
      case "anyone":
        return this.asks ? undefined : peer;
      case "publisher": {
        const publisher = this.#publishers.find(peer.name);
        return publisher && { kind: "publisher", ...publisher };
      }
      default:
        return peer satisfies never;
    }
  }

  #isOwn(secret: Uint8Array | undefined): boolean {
    const own = Buffer.from(this.own.password);
    return secret?.length === own.length && timingSafeEqual(secret, own);
  }

  async #inTurn<T>(look: () => Promise<T>): Promise<T> {
    this.#waiting++;
    const mine = this.#last.then(look);
    this.#last = mine.catch(() => {});
    try {
      return await mine;
    } finally {
      this.#waiting--;
    }
  }
}
