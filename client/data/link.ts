import type { FromServer, Subscribe } from "../../core/messages/index.ts";
import { linkLostAfterMs } from "../../core/messages/index.ts";

export interface LinkEvents {
  /** what to ask for on every (re)connection */
  subscription: () => Subscribe;
  message: (message: FromServer) => void;
  /** false as soon as nothing can be trusted to be current: closed, or silent for `linkLostAfterMs` */
  up: (up: boolean) => void;
}

const firstRetryMs = 500;
const longestRetryMs = 4000;

/** The WebSocket to the server: opens, listens, notices silence, and tries again until it is closed. */
export class Link {
  readonly #url: string;
  readonly #events: LinkEvents;
  #socket: WebSocket | undefined;
  #heardAt = 0;
  #retryMs = firstRetryMs;
  #retry: ReturnType<typeof setTimeout> | undefined;
  #guard: ReturnType<typeof setInterval> | undefined;

  constructor(url: string, events: LinkEvents) {
    this.#url = url;
    this.#events = events;
  }

  open(): void {
    this.#guard = setInterval(() => this.#checkSilence(), 250);
    this.#connect();
  }

  close(): void {
    clearInterval(this.#guard);
    clearTimeout(this.#retry);
    this.#drop();
  }

  #connect(): void {
    const socket = new WebSocket(this.#url);
    this.#socket = socket;
    this.#heardAt = performance.now();
    socket.onmessage = ({ data }) => {
      this.#heardAt = performance.now();
      const message = JSON.parse(String(data)) as FromServer;
      if (message.type === "hello") socket.send(JSON.stringify(this.#events.subscription()));
      if (message.type === "snapshot") {
        this.#retryMs = firstRetryMs;
        this.#events.message(message);
        this.#events.up(true);
        return;
      }
      this.#events.message(message);
    };
    socket.onclose = () => {
      if (socket === this.#socket) this.#lost();
    };
  }

  #checkSilence(): void {
    if (this.#socket && performance.now() - this.#heardAt > linkLostAfterMs) this.#lost();
  }

  #lost(): void {
    this.#drop();
    this.#events.up(false);
    this.#retry = setTimeout(() => this.#connect(), this.#retryMs);
    this.#retryMs = Math.min(longestRetryMs, this.#retryMs * 2);
  }

  #drop(): void {
    const socket = this.#socket;
    this.#socket = undefined;
    if (!socket) return;
    socket.onmessage = null;
    socket.onclose = null;
    socket.close();
  }
}
