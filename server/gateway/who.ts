import type { IncomingHttpHeaders } from "node:http";
import type { PlantConfig } from "../config/plant-config.ts";
import type { PeopleStore } from "../people/people-store.ts";
import type { Person } from "../people/person.ts";

export const sessionCookie = "millrace";

/** Tells who asks. */
export interface Who {
  /** undefined: somebody must sign in first */
  of(headers: IncomingHttpHeaders): Person | undefined;
  /** the secret of the session that the cookie names */
  session(headers: IncomingHttpHeaders): string | undefined;
  /** nobody needs to sign in: an invented person in the demo, or this machine while there are no people */
  open(): Person | undefined;
}

/**
 * A program shows a token, a person's browser the session's cookie. While there are no people the service is reached from this machine only
 * (the start sees to that), and whoever sits at it is an operator: an invented one in the demo.
 */
export function whoOf(
  config: PlantConfig,
  people: PeopleStore,
  parseCookie: (header: string) => Record<string, string | undefined>,
): Who {
  const session = ({ cookie }: IncomingHttpHeaders) =>
    cookie === undefined ? undefined : parseCookie(cookie)[sessionCookie];
  const open = (): Person | undefined =>
    people.isEmpty() ? { name: config.demo ? "R. Quill" : "this machine", role: "operator" } : undefined;
  return {
    session,
    open,
    of(headers) {
      const token = /^Bearer (\S+)$/.exec(headers.authorization ?? "")?.[1];
      if (token !== undefined) return people.ofToken(token, Date.now());
      const secret = session(headers);
      return (secret === undefined ? undefined : people.ofSession(secret, Date.now())) ?? open();
    },
  };
}
