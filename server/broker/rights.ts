import { everyStream } from "../people/publisher-store.ts";

/** Who a connection to the embedded broker belongs to. */
export type Peer =
  /** this service's own engine: the only one that may say what was judged */
  | { kind: "service" }
  /** a program that has signed in */
  | { kind: "publisher"; name: string; streams: readonly string[] }
  /** anybody on this machine, while no publisher has been added */
  | { kind: "anyone" };

const toEngine = new Set(["reading", "state", "lab"]);

/**
 * May this peer publish to this topic? Undefined when it may, else why not. A result, an alarm or a status in the plant's own topics is
 * always the engine's: else anybody could say that an alarm is gone. Pure.
 *
 * @param root `<prefix>/<site>/`
 */
export function whyNotPublish(peer: Peer | undefined, topic: string, root: string): string | undefined {
  if (peer === undefined) return "has not signed in";
  if (topic.startsWith("$")) return "topics that begin with $ are the broker's own";
  if (peer.kind === "service") return undefined;
  const [stream, what, ...more] = topic.startsWith(root) ? topic.slice(root.length).split("/") : [];
  const isForEngine = what !== undefined && more.length === 0 && toEngine.has(what);
  if (topic.startsWith(root) && !isForEngine && !endsForEngine(topic)) return "only the service publishes there";
  if (peer.kind === "anyone") return undefined;
  const may = peer.streams.includes(everyStream) || (stream !== undefined && peer.streams.includes(stream));
  if (isForEngine && may) return undefined;
  return `${peer.name} may publish readings and states of ${peer.streams.join(", ") || "no stream"} only`;
}

/** May this peer listen to what is published? Whoever is known may: what may be seen is the same for all. */
export function mayListen(peer: Peer | undefined): boolean {
  return peer !== undefined;
}

/** A reading under a topic that is not quite ours: let in, so that its refusal is on record with the topic. */
function endsForEngine(topic: string): boolean {
  return toEngine.has(topic.slice(topic.lastIndexOf("/") + 1));
}
