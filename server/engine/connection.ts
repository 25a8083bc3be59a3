import type { IClientOptions } from "mqtt";
import type { PlantConfig } from "../config/plant-config.ts";

/** How the engine introduces itself to the broker. A fixed client id: the session that waits for it is known by it. */
export function connectionOf(config: PlantConfig, role: "readings" | "results"): IClientOptions {
  const { broker } = config.mqtt;
  if ("embedded" in broker) return { clientId: `millrace-${config.site}-${role}` };
  const { clientId = `millrace-${config.site}`, username, passwordFrom } = broker;
  return {
    clientId: `${clientId}-${role}`,
    ...(username === undefined ? {} : { username }),
    ...(passwordFrom === undefined ? {} : { password: process.env[passwordFrom] }),
  };
}
