import { readFileSync } from "node:fs";
import { dirname, resolve } from "node:path";
import { type Static, Type } from "typebox";
import { MillraceError, type Mismatch, mismatchSentence } from "../../core/errors.ts";
import { calendarDays, ShiftPlanError, ShiftPlanSchema, shiftCalendar } from "../../core/handover/index.ts";
import { AxisSpecSchema, checker, StreamIdSchema } from "../../core/messages/index.ts";

const pair = Type.Tuple([Type.Number(), Type.Number()]);

const StreamConfigSchema = Type.Object({
  id: StreamIdSchema,
  name: Type.String({ minLength: 1 }),
  /** the model file, seen from the configuration's folder */
  model: Type.String(),
  /** alarms of its own, seen from the configuration's folder; taken when the stream has no limit set yet */
  alarms: Type.Optional(Type.String()),
  /** the analyzer's own axis: a model that it does not cover is refused at the start, not reading by reading */
  axis: Type.Optional(AxisSpecSchema),
  /** expected time between two readings, ms */
  periodMs: Type.Number({ minimum: 10, maximum: 86_400_000 }),
  /** values at or above it are saturated, unit of the spectrum */
  ceiling: Type.Optional(Type.Number()),
  /** how results of the laboratory are matched to readings, and which are taken */
  lab: Type.Optional(
    Type.Object({
      /** how much later than the probe the sample point sees the same material; negative: earlier */
      lagSeconds: Type.Optional(Type.Number({ minimum: -86_400, maximum: 86_400 })),
      /** readings within it, about the moment of the sample, are averaged; 0: the two around that moment */
      windowSeconds: Type.Optional(Type.Number({ minimum: 0, maximum: 3600 })),
      /** by property: results outside are refused */
      plausible: Type.Optional(Type.Record(Type.String(), pair)),
    }),
  ),
  properties: Type.Optional(
    Type.Record(Type.String(), Type.Object({ target: Type.Optional(pair), scale: Type.Optional(pair) })),
  ),
});

/** A broker of the site's own. */
const ExternalBrokerSchema = Type.Object({
  /** mqtts:// and ssl:// go by TLS; user and password stand in fields of their own, never here */
  url: Type.String({ pattern: "^(mqtt|mqtts|tcp|ssl)://[^/@]+/?$" }),
  /** of MQTT; with 5 the session's expiry and the receive maximum are told to the broker, with 3.1.1 they are settings over there */
  version: Type.Optional(Type.Enum(["3.1.1", "5"])),
  clientId: Type.Optional(Type.String({ minLength: 1 })),
  username: Type.Optional(Type.String()),
  /** name of the environment variable that holds the password: it never stands in the file */
  passwordFrom: Type.Optional(Type.String()),
  /** PEM files, seen from the configuration's folder: who vouches for the broker, and the engine's own certificate where it asks for one */
  tls: Type.Optional(
    Type.Object({
      ca: Type.Optional(Type.String()),
      certificate: Type.Optional(Type.String()),
      key: Type.Optional(Type.String()),
    }),
  ),
  keepAliveSeconds: Type.Optional(Type.Integer({ minimum: 1, maximum: 65535 })),
  /** how long the broker keeps messages for an engine that is away (MQTT 5) */
  sessionExpiryHours: Type.Optional(Type.Number({ minimum: 0.01, maximum: 100_000 })),
  /** most messages received and not yet on record */
  inFlight: Type.Optional(Type.Integer({ minimum: 1, maximum: 65535 })),
});
export type ExternalBroker = Static<typeof ExternalBrokerSchema>;

const BrokerSchema = Type.Union([
  Type.Object({
    embedded: Type.Object({
      host: Type.String(),
      port: Type.Integer({ minimum: 0, maximum: 65535 }),
      /** PEM files, seen from the configuration's folder */
      tls: Type.Optional(Type.Object({ certificate: Type.String(), key: Type.String() })),
    }),
  }),
  ExternalBrokerSchema,
]);
export type BrokerConfig = Static<typeof BrokerSchema>;

/**
 * Where the screens are. Anything but the loopback needs people who sign in, and TLS: its own, or a proxy's that stands before it.
 */
const HttpSchema = Type.Object({
  host: Type.String(),
  port: Type.Integer({ minimum: 0, maximum: 65535 }),
  /** PEM files, seen from the configuration's folder */
  tls: Type.Optional(Type.Object({ certificate: Type.String(), key: Type.String() })),
  /** a proxy on this network ends TLS: say it here, it cannot be seen from here */
  tlsByProxy: Type.Optional(Type.Boolean()),
  /** names by which browsers reach it, besides those of this machine */
  names: Type.Optional(Type.Array(Type.String({ pattern: "^[A-Za-z0-9.-]+$" }))),
});
export type HttpConfig = Static<typeof HttpSchema>;

export const PlantConfigSchema = Type.Object({
  site: StreamIdSchema,
  name: Type.String({ minLength: 1 }),
  timeZone: Type.String(),
  /** folder of the record, seen from the configuration's folder */
  data: Type.String(),
  http: HttpSchema,
  mqtt: Type.Object({ prefix: Type.String({ pattern: "^[^+#\\u0000]+$" }), broker: BrokerSchema }),
  /** who may put limits in force: "another person" asks for an approver beside the author */
  limits: Type.Optional(Type.Object({ approval: Type.Literal("another person") })),
  /** how long spectra are kept, but those in excursions, which stay; without it all stay. Results stay in any case */
  retention: Type.Optional(Type.Object({ spectraDays: Type.Number({ minimum: 1 }) })),
  /** when the shifts begin and end, and whose they are; without it every calendar day is one */
  shifts: Type.Optional(ShiftPlanSchema),
  /** what a shift must have looked at; absent `shifts` (names): every shift */
  checks: Type.Optional(
    Type.Array(
      Type.Object({
        key: StreamIdSchema,
        says: Type.String({ minLength: 1, maxLength: 300 }),
        shifts: Type.Optional(Type.Array(Type.String(), { minItems: 1 })),
      }),
    ),
  ),
  /** an invented plant: the screens say so, and an invented person is signed in */
  demo: Type.Optional(Type.Boolean()),
  streams: Type.Array(StreamConfigSchema, { minItems: 1 }),
});
export type PlantConfig = Static<typeof PlantConfigSchema>;
export type StreamConfig = PlantConfig["streams"][number];

export class ConfigError extends MillraceError {
  readonly code = "config";
  constructor(where: string, mismatch: Mismatch) {
    super(mismatchSentence(where, mismatch), { cause: mismatch.cause });
  }
}

const configChecker = checker(PlantConfigSchema);
const loopback = new Set(["127.0.0.1", "::1", "localhost"]);

/** Reads a plant's configuration; the paths in it come back absolute. @throws ConfigError naming the file and the field. */
export function readPlantConfig(file: string): PlantConfig {
  let text: string;
  try {
    text = readFileSync(file, "utf8");
  } catch (cause) {
    throw new ConfigError(file, {
      got: `not readable (${(cause as NodeJS.ErrnoException).code})`,
      expected: "a plant's configuration",
      todo: "Name an existing file with --config.",
      cause,
    });
  }
  return parsePlantConfig(text, file);
}

export function parsePlantConfig(text: string, file: string): PlantConfig {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (cause) {
    throw new ConfigError(file, {
      got: `no JSON (${(cause as Error).message})`,
      expected: "a JSON object",
      todo: "Correct the file.",
      cause,
    });
  }
  const wrong = configChecker.mismatch(value);
  if (wrong) throw new ConfigError(wrong.field ? `${file}: ${wrong.field}` : file, { ...wrong, todo: "Correct it." });
  const config = value as PlantConfig;
  checkTimeZone(config.timeZone, file);
  checkShifts(config, file);
  checkStreams(config.streams, file);
  checkHttp(config.http, `${file}: http`);
  if ("embedded" in config.mqtt.broker) {
    checkBrokerHost(config.mqtt.broker.embedded, `${file}: mqtt.broker.embedded`);
  }
  const from = (path: string) => resolve(dirname(file), path);
  return {
    ...config,
    data: from(config.data),
    mqtt: { ...config.mqtt, broker: brokerFrom(config.mqtt.broker, from) },
    http: {
      ...config.http,
      ...(config.http.tls && {
        tls: { certificate: from(config.http.tls.certificate), key: from(config.http.tls.key) },
      }),
    },
    streams: config.streams.map((stream) => ({
      ...stream,
      model: from(stream.model),
      ...(stream.alarms ? { alarms: from(stream.alarms) } : {}),
    })),
  };
}

function brokerFrom(broker: BrokerConfig, from: (path: string) => string): BrokerConfig {
  if ("embedded" in broker) {
    const { tls } = broker.embedded;
    const files = tls && { certificate: from(tls.certificate), key: from(tls.key) };
    return { embedded: { ...broker.embedded, ...(files && { tls: files }) } };
  }
  if (!broker.tls) return broker;
  const tls = Object.fromEntries(Object.entries(broker.tls).map(([what, path]) => [what, from(path)]));
  return { ...broker, tls };
}

function checkTimeZone(timeZone: string, file: string): void {
  try {
    new Intl.DateTimeFormat("en", { timeZone });
  } catch (cause) {
    throw new ConfigError(`${file}: timeZone`, {
      got: `"${timeZone}"`,
      expected: 'a zone of the IANA time zone data, such as "Europe/Oslo"',
      todo: "Correct it.",
      cause,
    });
  }
}

function checkShifts({ shifts = calendarDays, timeZone, checks = [] }: PlantConfig, file: string): void {
  const names = shifts.shifts.map(({ name }) => name);
  checks.forEach(({ key, shifts: own = [] }, i) => {
    const unknown = own.find((name) => !names.includes(name));
    const repeated = checks.findIndex((check) => check.key === key) < i;
    if (unknown === undefined && !repeated) return;
    throw new ConfigError(`${file}: checks[${i}].${repeated ? "key" : "shifts"}`, {
      got: repeated ? `"${key}" again` : `"${unknown}"`,
      expected: repeated ? "a key of its own" : `a shift of the plan (${names.join(", ")})`,
      todo: "Correct it.",
    });
  });
  try {
    shiftCalendar(shifts, timeZone);
  } catch (cause) {
    if (!(cause instanceof ShiftPlanError)) throw cause;
    throw new ShiftPlanError(`${file}: shifts: ${cause.message}`, { cause });
  }
}

function checkStreams(streams: readonly StreamConfig[], file: string): void {
  const seen = new Set<string>();
  streams.forEach(({ id }, i) => {
    if (seen.has(id)) {
      throw new ConfigError(`${file}: streams[${i}].id`, {
        got: `"${id}" again`,
        expected: "an id of its own",
        todo: "Rename one of the two.",
      });
    }
    seen.add(id);
  });
}

export function isLoopback(host: string): boolean {
  return loopback.has(host);
}

function checkHttp({ host, tls, tlsByProxy, names }: HttpConfig, where: string): void {
  if (isLoopback(host)) return;
  if (!tls && !tlsByProxy) {
    throw new ConfigError(`${where}.host`, {
      got: `"${host}", which other machines reach, without TLS`,
      expected: `${where}.tls (certificate and key), or ${where}.tlsByProxy: true where a proxy ends TLS`,
      todo: "Give one of them, or listen on 127.0.0.1.",
    });
  }
  if (!names?.length) {
    throw new ConfigError(`${where}.names`, {
      got: "missing",
      expected: "the names by which browsers reach the service",
      todo: "List them: requests under any other name are not answered.",
    });
  }
}

/** Secrets cross the network in MQTT's CONNECT as they are, so there the broker speaks TLS. (That it knows publishers is seen to at the start.) */
function checkBrokerHost({ host, tls }: { host: string; tls?: object }, where: string): void {
  if (isLoopback(host) || tls) return;
  throw new ConfigError(`${where}.host`, {
    got: `"${host}", which other machines reach, without TLS`,
    expected: `an address of this machine only (127.0.0.1, ::1 or localhost), or ${where}.tls (certificate and key)`,
    todo: "Give one of them, or use a broker of your own for analyzers on the network.",
  });
}
