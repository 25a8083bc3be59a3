import type { IncomingMessage } from "node:http";
import { createInterface } from "node:readline";
import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { MillraceError } from "../../../core/errors.ts";
import { ProblemSchema, StreamIdSchema } from "../../../core/messages/index.ts";
import { loadHistory } from "../../load/load-history.ts";
import { readingsOfCborSequence, readingsOfLines } from "../../load/readings.ts";
import type { GatewayParts } from "../gateway.ts";
import { RequestError } from "../problem.ts";

const LoadOutcomeSchema = Type.Object({
  recorded: Type.Integer(),
  repeated: Type.Integer(),
  refused: Type.Integer(),
});
/** A year of one stream; the body is read as it comes, never held. */
const mostBytes = 64 * 1024 ** 3;

/** Recorded history of one stream, as NDJSON or a CBOR sequence. */
export function loadRoutes(app: FastifyInstance, { engine }: GatewayParts): void {
  for (const type of ["application/x-ndjson", "application/cbor-seq"]) {
    app.addContentTypeParser(type, (_request, payload, done) => done(null, payload));
  }
  app.post<{ Params: { id: string }; Body: IncomingMessage }>(
    "/streams/:id/load",
    {
      bodyLimit: mostBytes,
      schema: {
        params: Type.Object({ id: StreamIdSchema }),
        response: { 200: LoadOutcomeSchema, 400: ProblemSchema, 409: ProblemSchema, 415: ProblemSchema },
      },
    },
    async ({ params: { id }, body, headers }) => {
      const lines = headers["content-type"]?.startsWith("application/x-ndjson");
      const items = lines ? readingsOfLines(createInterface({ input: body })) : readingsOfCborSequence(body);
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
