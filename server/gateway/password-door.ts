import type { FastifyRequest } from "fastify";
import type { EngineThread } from "../engine/engine-thread.ts";
import type { Person } from "../people/person.ts";
import { afterFailure, type Failures, waitLeft } from "../people/throttle.ts";
import { RequestError } from "./problem.ts";

/** Names and addresses whose failures are remembered: a guesser with many names must not fill the memory. */
const mostRemembered = 10_000;

type Check = (name: string, password: string) => Promise<Person | undefined> | Person | undefined;

/** Where a name is shown with its password, to sign in or to sign a record: failures are counted together, slowed down, and put on record. */
export class PasswordDoor {
  readonly #engine: Pick<EngineThread, "command">;
  readonly #failures = new Map<string, Failures>();

  constructor(engine: Pick<EngineThread, "command">) {
    this.#engine = engine;
  }

  /**
   * The person whose name and password they are.
   *
   * @param what it was for, as the record says it: "sign-in", "signature"
   * @throws RequestError 401 when they do not belong together, 429 after too many failures
   */
  async pass(
    { ip }: Pick<FastifyRequest, "ip">,
    { name, password }: { name: string; password: string },
    { what, check }: { what: string; check: Check },
  ): Promise<Person> {
    const key = `${ip} ${name}`;
    const wait = waitLeft(this.#failures.get(key), Date.now());
    if (wait > 0) {
      const says = `Too many failed ${what}s. Wait ${Math.ceil(wait / 1000)} s, then try again.`;
      throw new RequestError(429, "wait", says);
    }
    const person = await check(name, password);
    if (person) {
      this.#failures.delete(key);
      return person;
    }
    const { size } = this.#failures;
    if (size >= mostRemembered) this.#failures.delete(this.#failures.keys().next().value!);
    this.#failures.set(key, afterFailure(this.#failures.get(key), Date.now()));
    const says = `A ${what} as "${name.slice(0, 60)}" from ${ip} failed.`;
    await this.#engine.command({ kind: "record", event: `${what} refused`, says });
    throw new RequestError(401, "wrong-name-or-password", "This name and password do not belong together.");
  }
}
