import type { IncomingHttpHeaders } from "node:http";

const thisMachine = ["127.0.0.1", "localhost", "[::1]"];

/**
 * Does a request come from our own page, under a name of ours? A page from elsewhere, open in the same browser, could ask us too: such a
 * request carries that page's origin, or (DNS rebinding) a host name that is not ours.
 *
 * @param names by which browsers reach the service, besides those of this machine
 */
export function isOurs(
  { host, origin }: Pick<IncomingHttpHeaders, "host" | "origin">,
  names: readonly string[] = [],
): boolean {
  if (host === undefined) return false;
  const name = hostnameOf(`http://${host}`);
  if (!thisMachine.includes(name) && !names.includes(name)) return false;
  return origin === undefined || origin === `http://${host}` || origin === `https://${host}`;
}

function hostnameOf(url: string): string {
  return URL.canParse(url) ? new URL(url).hostname : "";
}
