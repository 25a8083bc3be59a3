import type { FastifyInstance } from "fastify";
import type { Figures } from "../figures.ts";
import type { LiveHub } from "../live-hub.ts";

/** For those who watch over machines: is it alive, is it of use, and how is it doing? No sign-in, and nothing here that is a secret. */
export function healthRoutes(app: FastifyInstance, { live, figures }: { live: LiveHub; figures: Figures }): void {
  const options = { schema: { hide: true } };

  app.get("/healthz", options, () => ({ status: "alive" }));

  app.get("/readyz", options, (_request, reply) => {
    const why = whyNotReady(live);
    reply.code(why.length === 0 ? 200 : 503);
    return { status: why.length === 0 ? "ready" : "not ready", why };
  });

  app.get("/metrics", options, async (_request, reply) => {
    reply.type(figures.contentType);
    return figures.text();
  });
}

/** Everything that keeps readings from being judged, recorded and shown, in words; empty when nothing does. */
export function whyNotReady({ engineHeard, picture: { health } }: Pick<LiveHub, "engineHeard" | "picture">): string[] {
  if (!engineHeard) return ["The engine has not reported for some seconds: nothing is judged. Restart the service."];
  return [
    ...(health.source ? [] : ["The broker that readings come from is not reached. Check its address and the network."]),
    ...(health.trouble === undefined ? [] : [health.trouble]),
  ];
}
