import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import {
  AcknowledgeSchema,
  ProblemSchema,
  ReadingViewSchema,
  StreamIdSchema,
  TrendSchema,
} from "../../../core/messages/index.ts";
import type { GatewayParts } from "../gateway.ts";
import { RequestError } from "../problem.ts";

const StreamParams = Type.Object({ id: StreamIdSchema });
const AlarmParams = Type.Object({ id: StreamIdSchema, key: StreamIdSchema });
const TrendQuery = Type.Object({
  from: Type.Integer(),
  to: Type.Integer(),
  points: Type.Integer({ minimum: 1, maximum: 5000, default: 1500 }),
});
const AtQuery = Type.Object({ at: Type.Optional(Type.Integer()) });
const problems = { 404: ProblemSchema, 409: ProblemSchema, 400: ProblemSchema };

/** Readings, trends and alarms of one stream. */
export function streamRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { config, store, explainer, engine, allowed } = parts;

  function known(id: string): void {
    if (config.streams.some((stream) => stream.id === id)) return;
    const ids = config.streams.map((stream) => stream.id).join(", ");
    throw new RequestError(404, "unknown-stream", `${id} is no stream of this plant; it has ${ids}.`);
  }

  app.get<{ Params: { id: string }; Querystring: { from: number; to: number; points: number } }>(
    "/streams/:id/trend",
    { schema: { params: StreamParams, querystring: TrendQuery, response: { 200: TrendSchema, ...problems } } },
    ({ params: { id }, query: { from, to, points } }) => {
      known(id);
      if (to <= from) {
        throw new RequestError(400, "empty-range", `to is ${to}, expected a time after from, ${from} (epoch ms).`);
      }
      return store.trend(id, parts.propertiesOf(id), from, to, points);
    },
  );

  app.get<{ Params: { id: string }; Querystring: { at?: number } }>(
    "/streams/:id/reading",
    { schema: { params: StreamParams, querystring: AtQuery, response: { 200: ReadingViewSchema, ...problems } } },
    ({ params: { id }, query: { at = Number.MAX_SAFE_INTEGER } }) => {
      known(id);
      const view = explainer.view(id, at);
      if (!view) throw new RequestError(404, "no-reading", `${id} has no reading at or before that time.`);
      return view;
    },
  );

  app.post<{ Params: { id: string; key: string }; Body: { note?: string } | null }>(
    "/streams/:id/alarms/:key/acknowledge",
    {
      schema: {
        params: AlarmParams,
        body: Type.Union([AcknowledgeSchema, Type.Null()]),
        response: { 200: Type.Object({ done: Type.Literal(true) }), ...problems },
      },
    },
    async (request) => {
      const {
        params: { id, key },
        body,
      } = request;
      known(id);
      const person = allowed(request, "operator");
      const note = body?.note;
      const outcome = await engine.command({ kind: "acknowledge", stream: id, key, by: person.name, note });
      if (!outcome.done) throw new RequestError(409, "not-acknowledged", `${outcome.says}.`);
      return outcome;
    },
  );
}
