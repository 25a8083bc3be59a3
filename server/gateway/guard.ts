import type { IncomingHttpHeaders } from "node:http";

const ownNames = new Set(["127.0.0.1", "localhost", "[::1]"]);

/**
 * Does a request come from our own page on this machine? The service listens on the loopback only, but a page from elsewhere, open in a
 * browser here, could still ask it: such a request carries that page's origin, or (DNS rebinding) a host name that is not ours.
 */
export function isOurs({ host, origin }: Pick<IncomingHttpHeaders, "host" | "origin">): boolean {
  if (host === undefined || !ownNames.has(hostnameOf(`http://${host}`))) return false;
  return origin === undefined || origin === `http://${host}`;
}

function hostnameOf(url: string): string {
  return URL.canParse(url) ? new URL(url).hostname : "";
}
