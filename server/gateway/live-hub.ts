import type { IncomingHttpHeaders, Server } from "node:http";
import { WebSocket, WebSocketServer } from "ws";
import {
  type Batch,
  beatEveryMs,
  checker,
  type EngineHealth,
  type FromServer,
  type Judged,
  linkLostAfterMs,
  type RecordedEvent,
  type StreamNow,
  SubscribeSchema,
} from "../../core/messages/index.ts";
import type { Told } from "../engine/engine.ts";

/** A client whose socket holds more than this unsent is slow: its live values are conflated until it has caught up. */
const slowAboveBytes = 256 * 1024;
/** Judged readings kept for the trend of a slow client; it reads the rest over HTTP. */
const mostHeldReadings = 500;
/** Events are never left out. A client that takes none for so long is cut off, and resumes from its cursor. */
const mostHeldEvents = 20_000;
const farewellMs = 1000;
const mostMessageBytes = 64 * 1024;
const mostEventsOnResume = 20_000;

const subscribeChecker = checker(SubscribeSchema);

interface Client {
  socket: WebSocket;
  /** of its opening: they say who it is */
  headers: IncomingHttpHeaders;
  streams: Set<string>;
  heldNow: Map<string, StreamNow>;
  heldReadings: Judged[];
  heldEvents: RecordedEvent[];
  skipped: number;
}

/** What the hub needs to know besides what the engine tells. */
export interface LiveSources {
  version: string;
  /** may who sends these headers see the streams? Asked again with every beat: a session ends, a person leaves. */
  isWelcome: (headers: IncomingHttpHeaders) => boolean;
  /** newest first */
  eventsAfter: (cursor: number, limit: number) => RecordedEvent[];
  streams: () => string[];
}

/**
 * The WebSocket side: hello → subscribe → snapshot → batches, and a beat every second, by which a screen knows that its link lives.
 */
export class LiveHub {
  readonly #server: WebSocketServer;
  readonly #sources: LiveSources;
  readonly #clients = new Set<Client>();
  readonly #now = new Map<string, StreamNow>();
  #cursor = 0;
  #heardAt = Number.NEGATIVE_INFINITY;
  #health: EngineHealth = { running: false, source: false, waiting: 0, behindMs: 0 };
  readonly #beating: NodeJS.Timeout;

  constructor(http: Server, sources: LiveSources) {
    this.#sources = sources;
    this.#server = new WebSocketServer({ noServer: true, maxPayload: mostMessageBytes });
    http.on("upgrade", (request, socket, head) => {
      const { pathname } = new URL(request.url ?? "/", "http://localhost");
      if (pathname !== "/live" || !sources.isWelcome(request.headers)) {
        socket.end("HTTP/1.1 403 Forbidden\r\nConnection: close\r\n\r\n");
        return;
      }
      this.#server.handleUpgrade(request, socket, head, (client) => this.#welcome(client, request.headers));
    });
    this.#beating = setInterval(() => this.#beat(), beatEveryMs);
  }

  told({ judged, now, events, cursor }: Told): void {
    this.#cursor = cursor;
    for (const stream of now) this.#now.set(stream.stream, stream);
    for (const client of this.#clients) {
      for (const stream of now) if (client.streams.has(stream.stream)) client.heldNow.set(stream.stream, stream);
      for (const reading of judged) if (client.streams.has(reading.stream)) client.heldReadings.push(reading);
      for (const event of events) {
        if (event.stream === null || client.streams.has(event.stream)) client.heldEvents.push(event);
      }
      this.#flush(client);
    }
  }

  health(health: EngineHealth): void {
    this.#health = health;
    this.#heardAt = performance.now();
  }

  /** Has the engine reported lately, as it does every second? */
  get engineHeard(): boolean {
    return this.#health.running && performance.now() - this.#heardAt < linkLostAfterMs;
  }

  /** How many live links are open. */
  get clients(): number {
    return this.#clients.size;
  }

  get picture(): { health: EngineHealth; now: StreamNow[] } {
    return { health: this.#health, now: [...this.#now.values()] };
  }

  /** Closes the links of those who may see no more. */
  dropUnwelcome(): void {
    for (const { socket, headers } of this.#clients) {
      if (!this.#sources.isWelcome(headers)) socket.close(4401, "sign in again");
    }
  }

  close(): void {
    clearInterval(this.#beating);
    for (const { socket } of this.#clients) socket.close(1001, "the service is stopping");
    this.#server.close();
    // Who does not answer the farewell must not hold up the stop.
    setTimeout(() => {
      for (const { socket } of this.#clients) socket.terminate();
    }, farewellMs).unref();
  }

  #welcome(socket: WebSocket, headers: IncomingHttpHeaders): void {
    const client: Client = {
      socket,
      headers,
      streams: new Set(),
      heldNow: new Map(),
      heldReadings: [],
      heldEvents: [],
      skipped: 0,
    };
    this.#clients.add(client);
    socket.on("close", () => this.#clients.delete(client));
    socket.on("error", () => socket.terminate());
    socket.on("message", (data, isBinary) => this.#hear(client, isBinary ? undefined : String(data)));
    send(socket, { type: "hello", protocol: 1, version: this.#sources.version, serverTime: Date.now() });
  }

  #hear(client: Client, text: string | undefined): void {
    let value: unknown;
    try {
      value = JSON.parse(text ?? "");
    } catch {
      send(client.socket, { type: "refused", says: "the message is no JSON text, expected a subscription" });
      return;
    }
    const wrong = subscribeChecker.mismatch(value);
    if (wrong || !subscribeChecker.is(value)) {
      const says = `${wrong?.field || "the message"} is ${wrong?.got}, expected: ${wrong?.expected}`;
      send(client.socket, { type: "refused", says });
      return;
    }
    const known = new Set(this.#sources.streams());
    const unknown = value.streams.filter((stream) => !known.has(stream));
    if (unknown.length > 0) {
      const says = `streams: ${unknown[0].slice(0, 64)} is no stream of this plant; it has ${[...known].join(", ")}`;
      send(client.socket, { type: "refused", says });
      return;
    }
    client.streams = new Set(value.streams);
    client.heldNow.clear();
    client.heldReadings = [];
    client.heldEvents = [];
    client.skipped = 0;
    const events =
      value.since === undefined ? [] : this.#sources.eventsAfter(value.since, mostEventsOnResume).reverse();
    send(client.socket, {
      type: "snapshot",
      serverTime: Date.now(),
      cursor: this.#cursor,
      engine: this.#health,
      streams: [...this.#now.values()].filter(({ stream }) => client.streams.has(stream)),
      events: events.filter((event) => event.stream === null || client.streams.has(event.stream)),
    });
  }

  #flush(client: Client): void {
    const { socket, heldNow, heldReadings, heldEvents } = client;
    if (socket.readyState !== WebSocket.OPEN) return;
    if (socket.bufferedAmount > slowAboveBytes) {
      const surplus = heldReadings.length - mostHeldReadings;
      if (surplus > 0) {
        client.heldReadings = heldReadings.slice(surplus);
        client.skipped += surplus;
      }
      if (heldEvents.length > mostHeldEvents) socket.terminate();
      return;
    }
    if (heldNow.size + heldReadings.length + heldEvents.length === 0) return;
    const batch: Batch = {
      type: "batch",
      serverTime: Date.now(),
      cursor: this.#cursor,
      now: [...heldNow.values()],
      readings: heldReadings,
      skipped: client.skipped,
      events: heldEvents,
    };
    client.heldNow = new Map();
    client.heldReadings = [];
    client.heldEvents = [];
    client.skipped = 0;
    send(socket, batch);
  }

  #beat(): void {
    this.dropUnwelcome();
    const beat: FromServer = { type: "beat", serverTime: Date.now(), engine: this.#health };
    for (const client of this.#clients) {
      this.#flush(client);
      if (client.socket.readyState === WebSocket.OPEN && client.socket.bufferedAmount <= slowAboveBytes) {
        send(client.socket, beat);
      }
    }
  }
}

function send(socket: WebSocket, message: FromServer): void {
  if (socket.readyState === WebSocket.OPEN) socket.send(JSON.stringify(message));
}
