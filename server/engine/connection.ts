import { readFileSync } from "node:fs";
import { connect as connectTcp, isIP } from "node:net";
import type { Duplex } from "node:stream";
import { connect as connectTls } from "node:tls";
import type { IClientOptions } from "mqtt";
import { ConfigError, type ExternalBroker, type PlantConfig } from "../config/plant-config.ts";
import type { EngineSettings } from "./protocol.ts";

/** How the engine reaches its broker and introduces itself there. */
export interface Connection {
  url: string;
  options: IClientOptions;
  /** how many messages may be received and not yet acknowledged */
  inFlight: number;
  /** opens the link under MQTT: TCP, or TLS for mqtts:// and ssl:// */
  dial: () => Duplex;
}

const defaults = { keepAliveSeconds: 30, sessionExpiryHours: 7 * 24, inFlight: 200 };
/** A reading has at most 4 MB: what is beyond this need not even come (MQTT 5 only). */
const mostPacketBytes = 16 * 1024 * 1024;
/** Waiting times between attempts to reach the broker: doubled each time, with a little chance, so that many clients do not come at once. */
const firstWaitMs = 1000;
const longestWaitMs = 30_000;

/**
 * A fixed client id: the session that waits for the engine is known by it.
 *
 * @throws ConfigError when a file or the password that the configuration names is not there
 */
export function connectionOf(
  config: PlantConfig,
  { brokerUrl: url, brokerSecret }: Pick<EngineSettings, "brokerUrl" | "brokerSecret">,
  role: "readings" | "results",
): Connection {
  const { broker } = config.mqtt;
  const external: ExternalBroker = "embedded" in broker ? { url } : broker;
  const { clientId = `millrace-${config.site}`, version = "3.1.1", username, passwordFrom, tls = {} } = external;
  const { keepAliveSeconds, sessionExpiryHours, inFlight } = { ...defaults, ...external };
  const secrets = {
    ...(tls.ca && { ca: readPem(tls.ca, "ca") }),
    ...(tls.certificate && { cert: readPem(tls.certificate, "certificate") }),
    ...(tls.key && { key: readPem(tls.key, "key") }),
  };
  const { hostname, port, protocol } = new URL(url);
  const host = hostname.replace(/^\[|\]$/g, "");
  const isTls = protocol === "mqtts:" || protocol === "ssl:";
  const servername = isIP(host) === 0 ? { servername: host } : {};
  return {
    url,
    inFlight,
    dial: () =>
      isTls
        ? connectTls({ host, port: Number(port || 8883), ...servername, ...secrets })
        : connectTcp({ host, port: Number(port || 1883) }),
    options: {
      clientId: `${clientId}-${role}`,
      keepalive: keepAliveSeconds,
      connectTimeout: 15_000,
      reconnectPeriod: firstWaitMs,
      // A refusal (wrong password, broker starting up) may be mended over there: go on asking.
      reconnectOnConnackError: true,
      ...(username === undefined ? {} : { username }),
      ...(passwordFrom === undefined ? {} : { password: passwordIn(passwordFrom) }),
      ...brokerSecret,
      ...secrets,
      ...(version === "3.1.1"
        ? { protocolVersion: 4 as const }
        : {
            protocolVersion: 5 as const,
            properties: {
              // Without it an MQTT 5 session ends with its connection.
              ...(role === "readings" ? { sessionExpiryInterval: Math.round(sessionExpiryHours * 3600) } : {}),
              receiveMaximum: inFlight,
              maximumPacketSize: mostPacketBytes,
            },
          }),
    },
  };
}

/** How long to wait before the attempt after this one. */
export function nextWaitMs(lastMs: number): number {
  return Math.min(longestWaitMs, lastMs * 2) * (0.8 + 0.2 * Math.random());
}
export { firstWaitMs };

function readPem(file: string, field: string): Buffer {
  try {
    return readFileSync(file);
  } catch (cause) {
    throw new ConfigError(`mqtt.broker.tls.${field}`, {
      got: `${file}, which is not readable (${(cause as NodeJS.ErrnoException).code})`,
      expected: "a PEM file",
      todo: "Correct the path or the file's permissions.",
      cause,
    });
  }
}

function passwordIn(variable: string): string {
  const password = process.env[variable];
  if (password !== undefined) return password;
  throw new ConfigError("mqtt.broker.passwordFrom", {
    got: `${variable}, an environment variable that is not set`,
    expected: "the name of the one that holds the broker's password",
    todo: "Set it for the service.",
  });
}
