import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { ProblemSchema, ReadingViewSchema, StreamIdSchema, TrendSchema } from "../../../core/messages/index.ts";
import type { GatewayParts } from "../gateway.ts";
import { knownStream } from "../known-stream.ts";
import { RequestError } from "../problem.ts";

const StreamParams = Type.Object({ id: StreamIdSchema });
const TrendQuery = Type.Object({
  from: Type.Integer(),
  to: Type.Integer(),
  points: Type.Integer({ minimum: 1, maximum: 5000, default: 1500 }),
});
const AtQuery = Type.Object({ at: Type.Optional(Type.Integer()) });
const problems = { 404: ProblemSchema, 400: ProblemSchema };

/** Readings and trends of one stream. */
export function streamRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { store, explainer } = parts;

  app.get<{ Params: { id: string }; Querystring: { from: number; to: number; points: number } }>(
    "/streams/:id/trend",
    { schema: { params: StreamParams, querystring: TrendQuery, response: { 200: TrendSchema, ...problems } } },
    ({ params: { id }, query: { from, to, points } }) => {
      knownStream(parts, id);
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
      knownStream(parts, id);
      const view = explainer.view(id, at);
      if (!view) throw new RequestError(404, "no-reading", `${id} has no reading at or before that time.`);
      return view;
    },
  );
}
