/** The topics of one site: `<prefix>/<site>/<stream>/<what>` (design of the contract: reading in; result, alarm, status out). */
export interface Topics {
  /** what the engine subscribes to */
  readings: string;
  /** the stream that a reading's topic names; undefined when the topic is not one of this site's readings */
  streamOf(topic: string): string | undefined;
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
    streamOf(topic) {
      if (!topic.startsWith(root) || !topic.endsWith("/reading")) return undefined;
      const stream = topic.slice(root.length, -"/reading".length);
      return stream.includes("/") ? undefined : stream;
    },
    result: (stream) => `${root}${stream}/result`,
    alarm: (stream) => `${root}${stream}/alarm`,
    status: (stream) => `${root}${stream}/status`,
    engineStatus: `${root}status`,
  };
}
