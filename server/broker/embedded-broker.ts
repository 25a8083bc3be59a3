import { readFileSync } from "node:fs";
import { createServer, type Server, type Socket } from "node:net";
import { createServer as createTlsServer } from "node:tls";
import { Aedes, type AuthenticateError, type Client, type PublishPacket } from "aedes";
import { MillraceError, mismatchSentence } from "../../core/errors.ts";
import type { Log } from "../log.ts";
import { limitPackets } from "../mqtt/packet-limit.ts";
import type { Door } from "./door.ts";
import { Inbox } from "./inbox.ts";
import { RetainedLimit } from "./retained-limit.ts";
import { mayListen, type Peer, whyNotPublish } from "./rights.ts";
import { seldom } from "./seldom.ts";

export class BrokerError extends MillraceError {
  readonly code = "broker";
}

/** How the broker itself does, for the figures. */
export interface BrokerState {
  connections: number;
  /** bytes in the inbox, not yet on record */
  inboxBytes: number;
  /** messages whose publisher waits for its PUBACK */
  held: number;
  /** what was not let in since the start, by reason */
  turnedAway: Record<string, number>;
}

export interface EmbeddedBroker {
  /** where the service's own engine reaches it: on this machine, without TLS */
  ownUrl: string;
  /** What the engine has on record may go from the inbox. */
  drainedUpTo(n: number): void;
  state(): BrokerState;
  close(): Promise<void>;
}

/** A reading has at most 4 MB; its topic, at most 64 kB. What is longer is no reading, and its connection is closed before it has come. */
const mostPacketBytes = 4 * 1024 * 1024 + 128 * 1024;
/** Before somebody has signed in: a CONNECT with its last will. */
const mostBytesAtTheDoor = 64 * 1024;
const mostConnections = 500;
/** A subscriber that takes nothing for so long is cut off: what is published meanwhile waits for it in memory. */
const drainTimeoutMs = 5000;
const recheckMs = 1000;

/**
 * An MQTT 3.1.1 broker in this process. Readings and process states go to the inbox on disk before their publisher is answered: aedes writes the PUBACK of a
 * QoS 1 publish before any store is asked, and awaits only `authorizePublish` before it, so that is where the message is kept.
 *
 * It keeps sessions for nobody (each CONNACK says so): the engine's messages wait in the inbox, and queues for others would stand in memory.
 *
 * @param options.isReading which topics the engine must not lose
 * @param options.root      `<prefix>/<site>/`, the plant's own topics
 * @param options.onReading told after each commit that messages wait
 */
export async function startEmbeddedBroker(options: {
  host: string;
  port: number;
  tls?: { certificate: string; key: string };
  inboxFile: string;
  isReading: (topic: string) => boolean;
  root: string;
  door: Door;
  onReading: () => void;
  log: Log;
}): Promise<EmbeddedBroker> {
  const { isReading, door, root } = options;
  const inbox = new Inbox(options.inboxFile, options.onReading);
  const aedes = await Aedes.createBroker({
    maxClientsIdLength: 128,
    drainTimeout: drainTimeoutMs,
  } as Parameters<typeof Aedes.createBroker>[0]);
  const clients = new Set<Client>();
  const peers = new WeakMap<Client, Peer>();
  const retained = new RetainedLimit();
  const say = seldom(options.log);
  const turnedAway: Record<string, number> = {};
  const turnAway = (reason: string, says: string) => {
    turnedAway[reason] = (turnedAway[reason] ?? 0) + 1;
    say(reason, says);
  };

  aedes.preConnect = (_client, packet, callback) => {
    packet.clean = true;
    callback(null, true);
  };
  aedes.authenticate = (client, username, password, callback) => {
    const address = addressOf(client);
    const opened = door.open({ name: username, secret: password, address });
    const answered = opened.then((answer) => {
      if (answer.kind === "welcome") {
        peers.set(client, answer.peer);
        callback(null, true);
        return;
      }
      const who = username === undefined ? "without a name" : `as ${JSON.stringify(username.slice(0, 64))}`;
      turnAway(`sign-in ${answer.kind}`, `${address} may not come in ${who}: ${answer.kind}`);
      callback(refusal(answer.kind), false);
    });
    answered.catch((error: Error) => callback(refusal("busy", error.message), false));
  };
  aedes.authorizeSubscribe = (client, subscription, callback) =>
    callback(null, mayListen(client === null ? undefined : peers.get(client)) ? subscription : null);
  aedes.authorizePublish = (client, packet, callback) => {
    const why = whyNotPublish(client ? peers.get(client) : undefined, packet.topic, root);
    if (why !== undefined) {
      // MQTT 3.1.1 cannot refuse a message: an acknowledgement would say that it was kept, so the connection ends.
      turnAway(
        "no right to publish",
        `${addressOf(client)} to topic ${JSON.stringify(packet.topic.slice(0, 200))}: ${why}`,
      );
      callback(new Error(why));
      return;
    }
    const payload = typeof packet.payload === "string" ? Buffer.from(packet.payload) : packet.payload;
    keepRetained(packet, payload.length);
    if (isReading(packet.topic)) inbox.keep(packet.topic, payload, Date.now(), (error) => callback(error ?? null));
    else callback(null);
  };
  function keepRetained(packet: PublishPacket, bytes: number): void {
    if (!packet.retain || retained.mayKeep(packet.topic, bytes)) return;
    packet.retain = false;
    turnAway(
      "not retained",
      `topic ${JSON.stringify(packet.topic.slice(0, 200))} is passed on but not retained: too many or too large`,
    );
  }

  const handle = (socket: Socket) => {
    const client = aedes.handle(socket) as Client;
    clients.add(client);
    socket.once("close", () => clients.delete(client));
    limitPackets(socket, {
      mostBytes: () => (peers.has(client) ? mostPacketBytes : mostBytesAtTheDoor),
      tooLarge: (bytes) =>
        turnAway("packet too large", `${addressOf(client)} announced a packet of ${bytes} bytes and was cut off`),
    });
  };
  const servers = [createServer(handle)];
  const { host, port } = options;
  const where = { host: options.tls ? "127.0.0.1" : host, port: options.tls ? 0 : port };
  const ownPort = await listen(servers[0], where);
  if (options.tls) {
    const secrets = { cert: readFileSync(options.tls.certificate), key: readFileSync(options.tls.key) };
    servers.push(createTlsServer(secrets, handle));
    await listen(servers[1], { host, port });
  }
  for (const server of servers) {
    server.maxConnections = mostConnections;
    server.on("drop", () => turnAway("too many connections", `more than ${mostConnections} connections at a time`));
  }
  const rechecking = setInterval(() => {
    for (const client of clients) {
      const before = peers.get(client);
      if (before === undefined) continue; // still at the door, where it has 30 s
      const peer = door.again(before);
      if (peer) peers.set(client, peer);
      else client.close();
    }
  }, recheckMs);
  return {
    ownUrl: `mqtt://${where.host.includes(":") ? `[${where.host}]` : where.host}:${ownPort}`,
    drainedUpTo: (n) => inbox.drainedUpTo(n),
    state: () => ({
      connections: clients.size,
      inboxBytes: inbox.state.bytes,
      held: inbox.state.held,
      turnedAway,
    }),
    async close() {
      clearInterval(rechecking);
      const closed = servers.map((server) => new Promise<void>((resolve) => server.close(() => resolve())));
      await new Promise<void>((resolve) => aedes.close(() => resolve()));
      await Promise.all(closed);
      inbox.close();
    },
  };
}

/** MQTT 3.1.1 §3.2.2.3: 3 is "server unavailable", 4 is "bad user name or password". */
function refusal(kind: "refused" | "busy", says: string = kind): AuthenticateError {
  return Object.assign(new Error(says), { returnCode: kind === "busy" ? 3 : 4 }) as AuthenticateError;
}

function addressOf(client: Client | null): string {
  return (client?.conn as Socket | undefined)?.remoteAddress ?? "an address unknown";
}

function listen(server: Server, { host, port }: { host: string; port: number }): Promise<number> {
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
