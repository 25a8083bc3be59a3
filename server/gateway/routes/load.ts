import type { IncomingMessage } from "node:http";
import { createInterface } from "node:readline";
import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { MillraceError } from "../../../core/errors.ts";
import { AxisUnitSchema, ProblemSchema, StreamIdSchema } from "../../../core/messages/index.ts";
import { loadHistory } from "../../load/load-history.ts";
import { type HistoryItem, readingsOfCborSequence, readingsOfLines, readingsOfTable } from "../../load/readings.ts";
import type { GatewayParts } from "../gateway.ts";
import { RequestError } from "../problem.ts";

const LoadOutcomeSchema = Type.Object({
  recorded: Type.Integer(),
  repeated: Type.Integer(),
  refused: Type.Integer(),
});
/** A year of one stream; the body is read as it comes, never held. */
const mostBytes = 64 * 1024 ** 3;

/** Recorded history of one stream, as NDJSON, a CBOR sequence or a table. */
export function loadRoutes(app: FastifyInstance, { engine, allowed }: GatewayParts): void {
  for (const type of ["application/x-ndjson", "application/cbor-seq", "text/csv"]) {
    app.addContentTypeParser(type, (_request, payload, done) => done(null, payload));
  }
  app.post<{ Params: { id: string }; Body: IncomingMessage; Querystring: { axisUnit: "nm" | "cm-1" } }>(
    "/streams/:id/load",
    {
      bodyLimit: mostBytes,
      schema: {
        params: Type.Object({ id: StreamIdSchema }),
        querystring: Type.Object({ axisUnit: Type.Optional({ ...AxisUnitSchema, default: "nm" }) }),
        response: { 200: LoadOutcomeSchema, 400: ProblemSchema, 409: ProblemSchema, 415: ProblemSchema },
      },
    },
    async (request) => {
      allowed(request, "operator");
      const { id } = request.params;
      const items = itemsOf(request.body, request.headers["content-type"] ?? "", request.query.axisUnit);
      try {
        const outcomes = await loadHistory(engine, { items, stream: id });
        return outcomes.get(id) ?? { recorded: 0, repeated: 0, refused: 0 };
      } catch (error) {
        if (error instanceof MillraceError) throw new RequestError(409, error.code, error.message);
        throw error;
      }
    },
  );
}

function itemsOf(body: IncomingMessage, type: string, unit: "nm" | "cm-1"): AsyncIterable<HistoryItem> {
  if (type.startsWith("application/cbor-seq")) return readingsOfCborSequence(body);
  const lines = createInterface({ input: body, crlfDelay: Number.POSITIVE_INFINITY });
  return type.startsWith("text/csv") ? readingsOfTable(lines, unit) : readingsOfLines(lines);
}
