import { createServer, type Server } from "node:net";
import { Aedes } from "aedes";
import { MillraceError, mismatchSentence } from "../../core/errors.ts";
import { Inbox } from "./inbox.ts";

export class BrokerError extends MillraceError {
  readonly code = "broker";
}

export interface EmbeddedBroker {
  port: number;
  /** What the engine has on record may go from the inbox. */
  drainedUpTo(n: number): void;
  close(): Promise<void>;
}

/**
 * An MQTT 3.1.1 broker in this process. Readings, process states and laboratory results go to the inbox on disk before their publisher is answered: aedes writes the PUBACK of a
 * QoS 1 publish before any store is asked, and awaits only `authorizePublish` before it, so that is where the message is kept.
 *
 * @param options.isReading which topics the engine must not lose
 * @param options.onReading told after each commit that messages wait
 */
export async function startEmbeddedBroker(options: {
  host: string;
  port: number;
  inboxFile: string;
  isReading: (topic: string) => boolean;
  onReading: () => void;
}): Promise<EmbeddedBroker> {
  const inbox = new Inbox(options.inboxFile, options.onReading);
  const aedes = await Aedes.createBroker({ maxClientsIdLength: 128 } as Parameters<typeof Aedes.createBroker>[0]);
  aedes.authorizePublish = (_client, packet, callback) => {
    if (!options.isReading(packet.topic)) {
      callback(null);
      return;
    }
    const payload = typeof packet.payload === "string" ? Buffer.from(packet.payload) : packet.payload;
    inbox.keep(packet.topic, payload, Date.now(), (error) => callback(error ?? null));
  };
  const server = createServer(aedes.handle);
  const port = await listen(server, options.host, options.port);
  return {
    port,
    drainedUpTo: (n) => inbox.drainedUpTo(n),
    async close() {
      const closed = new Promise<void>((resolve) => server.close(() => resolve()));
      await new Promise<void>((resolve) => aedes.close(() => resolve()));
      await closed;
      inbox.close();
    },
  };
}

function listen(server: Server, host: string, port: number): Promise<number> {
  return new Promise((resolve, reject) => {
    server.once("error", (cause: NodeJS.ErrnoException) => {
      const mismatch = {
        got: cause.code === "EADDRINUSE" ? "in use already" : `not to be had (${cause.code})`,
        expected: "a free port",
        todo: "Stop the program that holds it, or set another port.",
      };
      reject(new BrokerError(mismatchSentence(`MQTT port ${host}:${port}`, mismatch), { cause }));
    });
    server.listen(port, host, () => {
      const address = server.address();
      resolve(typeof address === "object" && address ? address.port : port);
    });
  });
}
