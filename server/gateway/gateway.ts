import { existsSync, readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import fastifyCookie from "@fastify/cookie";
import fastifyStatic from "@fastify/static";
import fastifySwagger from "@fastify/swagger";
import Fastify, { type FastifyError, type FastifyInstance, type FastifyReply, type FastifyRequest } from "fastify";
import { MillraceError, mismatchSentence } from "../../core/errors.ts";
import type { BrokerState } from "../broker/embedded-broker.ts";
import type { PlantConfig } from "../config/plant-config.ts";
import type { EngineThread } from "../engine/engine-thread.ts";
import type { PeopleStore } from "../people/people-store.ts";
import { mayAct, type Person, type Role } from "../people/person.ts";
import { Rehearsals } from "../rehearsal/rehearsals.ts";
import type { StoreReader } from "../store/store.ts";
import { Figures } from "./figures.ts";
import { isOurs } from "./guard.ts";
import { LiveHub } from "./live-hub.ts";
import { PasswordDoor } from "./password-door.ts";
import { RequestError } from "./problem.ts";
import { ReadingExplainer } from "./reading-view.ts";
import { alarmRoutes } from "./routes/alarms.ts";
import { excursionRoutes } from "./routes/excursions.ts";
import { handoverRoutes } from "./routes/handover.ts";
import { healthRoutes } from "./routes/health.ts";
import { laboratoryRoutes } from "./routes/laboratory.ts";
import { limitSetRoutes } from "./routes/limit-sets.ts";
import { loadRoutes } from "./routes/load.ts";
import { peopleRoutes } from "./routes/people.ts";
import { recordRoutes } from "./routes/record.ts";
import { rehearsalRoutes } from "./routes/rehearsals.ts";
import { settingsRoutes } from "./routes/settings.ts";
import { shiftRoutes } from "./routes/shifts.ts";
import { streamRoutes } from "./routes/streams.ts";
import { type Who, whoOf } from "./who.ts";

/** What the routes work with. Reads go to the store; everything that changes something goes to the engine. */
export interface GatewayParts {
  config: PlantConfig;
  store: StoreReader;
  explainer: ReadingExplainer;
  engine: EngineThread;
  live: LiveHub;
  people: PeopleStore;
  rehearsals: Rehearsals;
  who: Who;
  passwords: PasswordDoor;
  /** who asks. @throws RequestError 401 when somebody must sign in first */
  personOf: (request: FastifyRequest) => Person;
  /** who asks, when their role lets them; every route that changes something calls it. @throws RequestError 403 */
  allowed: (request: FastifyRequest, needed: Role) => Person;
  version: string;
  propertiesOf: (stream: string) => string[];
}

export interface Gateway {
  live: LiveHub;
  figures: Figures;
  url: string;
  close(): Promise<void>;
}

export class GatewayError extends MillraceError {
  readonly code = "gateway";
}

// Scripts, fonts and connections from this origin only; uPlot and Lit set styles on elements.
const contentSecurityPolicy =
  "default-src 'self'; style-src 'self' 'unsafe-inline'; img-src 'self' data: blob:; object-src 'none'; base-uri 'none'; frame-ancestors 'none'; form-action 'self'";

/** HTTP API, WebSocket and the screens. */
export async function startGateway(options: {
  config: PlantConfig;
  store: StoreReader;
  engine: EngineThread;
  people: PeopleStore;
  version: string;
  /** whose sizes are among the figures */
  files: { record: string } & Record<string, string>;
  /** how the embedded broker does */
  broker?: () => BrokerState;
}): Promise<Gateway> {
  const { config, store, engine, people, version } = options;
  const app = makeServer(config.http);
  await app.register(fastifyCookie);
  const explainer = new ReadingExplainer(store);
  const rehearsals = new Rehearsals(options.files.record);
  const who = whoOf(config, people, (header) => app.parseCookie(header));
  const live = new LiveHub(app.server, {
    version,
    isWelcome: (headers) => isOurs(headers, config.http.names) && who.of(headers) !== undefined,
    eventsAfter: (cursor, limit) => store.events({ after: cursor, limit }),
    streams: () => config.streams.map(({ id }) => id),
  });
  const personOf = ({ headers }: FastifyRequest): Person => {
    const person = who.of(headers);
    if (person) return person;
    throw new RequestError(401, "sign-in-needed", "Sign in first.");
  };
  const parts: GatewayParts = {
    ...{ config, store, explainer, engine, live, people, rehearsals, who, version },
    passwords: new PasswordDoor(engine),
    personOf,
    allowed(request, needed) {
      const person = personOf(request);
      if (mayAct(person, needed)) return person;
      throw new RequestError(403, "not-allowed", `${person.name} is ${person.role}; this needs ${needed}.`);
    },
    propertiesOf(stream) {
      const limitSet = store.limitSet(stream);
      return limitSet ? explainer.model(limitSet.model).properties.map(({ name }) => name) : [];
    },
  };

  // The response schemas describe; JSON.stringify writes. (Checking every number of a trend against "number or null" costs more than it tells.)
  app.setSerializerCompiler(() => JSON.stringify);

  await app.register(fastifySwagger, {
    openapi: {
      openapi: "3.1.0",
      info: { title: "Millrace", version, description: "What the screens read. Advisory only, not a safety function." },
    },
  });
  app.addHook("onRequest", async (request, reply) => {
    if (!isOurs(request.headers, config.http.names)) {
      throw new RequestError(
        403,
        "foreign-origin",
        "This request comes from another page or host name; open the service by its own address.",
      );
    }
    reply.header("Content-Security-Policy", contentSecurityPolicy);
    reply.header("X-Content-Type-Options", "nosniff");
    reply.header("Referrer-Policy", "no-referrer");
  });
  app.setErrorHandler((error: FastifyError, _request, reply) => answerError(error, reply));
  const figures = new Figures(live, options.files, options.broker);
  healthRoutes(app, { live, figures });
  await app.register(
    async (api) => {
      api.addHook("onSend", async (_request, reply) => void reply.header("Cache-Control", "no-store"));
      // Whoever asks for anything but the door must be somebody.
      api.addHook("onRequest", async (request) => {
        if (!request.url.startsWith("/api/v1/sign-")) personOf(request);
      });
      peopleRoutes(api, parts);
      settingsRoutes(api, parts);
      recordRoutes(api, parts);
      streamRoutes(api, parts);
      alarmRoutes(api, parts);
      excursionRoutes(api, parts);
      loadRoutes(api, parts);
      laboratoryRoutes(api, parts);
      limitSetRoutes(api, parts);
      rehearsalRoutes(api, parts);
      shiftRoutes(api, parts);
      handoverRoutes(api, parts);
      api.get("/openapi.json", { schema: { hide: true } }, () => app.swagger());
      api.setNotFoundHandler((request) => {
        throw new RequestError(
          404,
          "unknown-path",
          `${request.method} ${request.url} is not part of the interface; /api/v1/openapi.json lists what is.`,
        );
      });
    },
    { prefix: "/api/v1" },
  );
  await serveScreens(app);
  const url = await listen(app, config.http);
  return {
    live,
    figures,
    url,
    async close() {
      live.close();
      await app.close();
      await rehearsals.stop();
      store.close();
      people.close();
    },
  };
}

function makeServer({ tls, tlsByProxy }: PlantConfig["http"]): FastifyInstance {
  const options = { bodyLimit: 64 * 1024, forceCloseConnections: true, trustProxy: tlsByProxy === true };
  if (!tls) return Fastify(options);
  const https = { cert: readPem(tls.certificate), key: readPem(tls.key), minVersion: "TLSv1.2" as const };
  return Fastify({ ...options, https }) as unknown as FastifyInstance;
}

function readPem(file: string): Buffer {
  try {
    return readFileSync(file);
  } catch (cause) {
    const mismatch = {
      got: `not readable (${(cause as NodeJS.ErrnoException).code})`,
      expected: "a PEM file",
      todo: "Correct http.tls.",
    };
    throw new GatewayError(mismatchSentence(file, mismatch), { cause });
  }
}

function answerError(error: FastifyError, reply: FastifyReply): void {
  if (error instanceof RequestError) {
    reply.code(error.status).send({ code: error.code, says: error.message });
  } else if (error.validation) {
    reply.code(400).send({ code: "bad-request", says: `${error.message}.` });
  } else if (error.statusCode !== undefined && error.statusCode < 500) {
    reply.code(error.statusCode).send({ code: error.code, says: error.message });
  } else {
    reply.code(500).send({ code: "fault", says: `A fault of the service: ${error.message}` });
  }
}

/** The built client. Any other path without a dot is a view of it, known to the client alone. */
async function serveScreens(app: FastifyInstance): Promise<void> {
  const root = fileURLToPath(new URL("../../client", import.meta.url));
  if (!existsSync(root)) {
    throw new GatewayError(
      mismatchSentence(root, { got: "not there", expected: "the built screens", todo: "Run 'npm run build' first." }),
    );
  }
  await app.register(fastifyStatic, { root, cacheControl: true, maxAge: 0 });
  app.setNotFoundHandler((request, reply) => {
    const path = request.url.split("?", 1)[0];
    if (request.method === "GET" && !path.slice(path.lastIndexOf("/")).includes("."))
      return reply.sendFile("index.html");
    throw new RequestError(404, "unknown-path", `${path} is not here.`);
  });
}

async function listen(app: FastifyInstance, { host, port }: PlantConfig["http"]): Promise<string> {
  try {
    return await app.listen({ host, port });
  } catch (error) {
    const cause = error as NodeJS.ErrnoException;
    const mismatch = {
      got: cause.code === "EADDRINUSE" ? "in use already" : `not to be had (${cause.code})`,
      expected: "a free port",
      todo: "Stop the program that holds it, or set another port.",
    };
    throw new GatewayError(mismatchSentence(`HTTP port ${host}:${port}`, mismatch), { cause });
  }
}
