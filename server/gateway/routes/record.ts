import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { LimitSetSchema } from "../../../core/limit-set/index.ts";
import {
  AlarmsSchema,
  EventsSchema,
  ExcursionsSchema,
  PlantSchema,
  RefusalsSchema,
  StreamIdSchema,
} from "../../../core/messages/index.ts";
import { ModelSchema } from "../../../core/model/index.ts";
import type { GatewayParts } from "../gateway.ts";
import { plantView } from "../plant-view.ts";

const stream = Type.Optional(StreamIdSchema);
const limit = Type.Integer({ minimum: 1, maximum: 1000, default: 100 });
/** the first word of an event's kind: "alarm", "excursion", "limits", "service" */
const about = Type.Optional(Type.String({ pattern: "^[a-z]{1,20}$" }));
const time = Type.Optional(Type.Integer());

/** The plant as a whole, and what is on record about it. */
export function recordRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { config, store, explainer, live, personOf, version, who } = parts;

  app.get("/plant", { schema: { response: { 200: PlantSchema } } }, (request) => {
    const troubled = live.picture.now.flatMap(({ stream, trouble }): [string, string][] =>
      trouble === undefined ? [] : [[stream, trouble]],
    );
    return plantView(config, store, explainer, {
      version,
      person: { ...personOf(request), signedIn: who.open() === undefined },
      troubles: new Map(troubled),
    });
  });

  app.get("/alarms", { schema: { response: { 200: AlarmsSchema } } }, () => ({
    alarms: live.picture.now.flatMap(({ alarms }) => alarms),
    setAside: live.picture.now.flatMap(({ setAside }) => setAside),
  }));

  app.get<{ Querystring: { stream?: string; about?: string; after?: number; before?: number; limit: number } }>(
    "/events",
    {
      schema: {
        querystring: Type.Object({ stream, about, after: time, before: time, limit }),
        response: { 200: EventsSchema },
      },
    },
    ({ query }) => ({ events: store.events(query) }),
  );

  app.get<{ Querystring: { stream?: string; from?: number; to?: number; limit: number } }>(
    "/excursions",
    {
      schema: {
        querystring: Type.Object({ stream, from: time, to: time, limit }),
        response: { 200: ExcursionsSchema },
      },
    },
    ({ query }) => ({ excursions: store.excursions(query) }),
  );

  app.get<{ Querystring: { stream?: string; limit: number } }>(
    "/refusals",
    { schema: { querystring: Type.Object({ stream, limit }), response: { 200: RefusalsSchema } } },
    ({ query }) => store.refusals(query.stream, query.limit),
  );

  app.get("/schemas/model", () => ModelSchema);
  app.get("/schemas/limit-set", () => LimitSetSchema);
}
