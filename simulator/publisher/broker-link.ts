import mqtt from "mqtt";

/** The one door of the simulator to the outside. */
export interface BrokerLink {
  /** resolves when the broker has acknowledged it (QoS 1) */
  publish(topic: string, payload: Buffer | string, options?: { retain?: boolean }): Promise<void>;
  /** closes; what the broker has not acknowledged within `graceMs` is given up */
  close(): Promise<void>;
}

/**
 * Connects, and again whenever the link breaks: what is under way is sent again then. MQTT 3.1.1.
 *
 * @param say told once when the link is lost or not to be had, and once when it is back
 */
export function brokerLink(url: string, clientId: string, say: (line: string) => void): BrokerLink {
  const client = mqtt.connect(url, {
    clientId,
    protocolVersion: 4,
    clean: true,
    reconnectPeriod: 1000,
    connectTimeout: 10_000,
    resubscribe: false,
  });
  let linked: boolean | undefined;
  let why = "";
  client.on("error", (error) => {
    why = ` (${error.message || "no reason given"})`;
  });
  client.on("connect", () => {
    if (linked !== true) say(`broker ${url} is reached`);
    linked = true;
  });
  client.on("close", () => {
    if (client.disconnecting) return;
    if (linked !== false) say(`broker ${url} is not reached${why}; trying again every second`);
    linked = false;
  });
  return {
    async publish(topic, payload, { retain = false } = {}) {
      await client.publishAsync(topic, payload, { qos: 1, retain });
    },
    async close() {
      await client.endAsync(true);
    },
  };
}
