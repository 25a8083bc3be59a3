import type { GatewayParts } from "./gateway.ts";
import { RequestError } from "./problem.ts";

/** @throws RequestError 404 naming the streams that there are */
export function knownStream({ config }: Pick<GatewayParts, "config">, id: string): void {
  if (config.streams.some((stream) => stream.id === id)) return;
  const ids = config.streams.map((stream) => stream.id).join(", ");
  throw new RequestError(404, "unknown-stream", `${id} is no stream of this plant; it has ${ids}.`);
}
