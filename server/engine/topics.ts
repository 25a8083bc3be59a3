/** The topics of one site: `<prefix>/<site>/<stream>/<what>` (reading, state and lab in; result, alarm, status out). */
export interface Topics {
  /** what the engine subscribes to: readings, what the plant says of the process, results of the laboratory */
  readings: string;
  states: string;
  labs: string;
  /** the stream that a topic names, and what comes on it; undefined when it is not one of those that the engine reads */
  read(topic: string): { stream: string; what: Incoming } | undefined;
  result(stream: string): string;
  alarm(stream: string): string;
  /** retained: a stream's verdict and open alarms, whenever one of them changes */
  status(stream: string): string;
  /** retained: is the engine there at all; also its last will (a connection has but one) */
  engineStatus: string;
}

export function topicsOf(prefix: string, site: string): Topics {
  const root = `${prefix}/${site}/`;
  return {
    readings: `${root}+/reading`,
    states: `${root}+/state`,
    labs: `${root}+/lab`,
    read(topic) {
      const what = whatOf(topic);
      if (what === undefined || !topic.startsWith(root)) return undefined;
      const stream = topic.slice(root.length, -(what.length + 1));
      return stream.includes("/") ? undefined : { stream, what };
    },
    result: (stream) => `${root}${stream}/result`,
    alarm: (stream) => `${root}${stream}/alarm`,
    status: (stream) => `${root}${stream}/status`,
    engineStatus: `${root}status`,
  };
}

const incoming = ["reading", "state", "lab"] as const;
type Incoming = (typeof incoming)[number];

function whatOf(topic: string): Incoming | undefined {
  return incoming.find((what) => topic.endsWith(`/${what}`));
}
