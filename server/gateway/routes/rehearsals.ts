import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { ProblemSchema, StreamIdSchema } from "../../../core/messages/index.ts";
import {
  type RehearsalRequest,
  RehearsalRequestSchema,
  type RehearsalStanding,
} from "../../../core/rehearsal/index.ts";
import type { GatewayParts } from "../gateway.ts";
import { knownStream } from "../known-stream.ts";
import { RequestError } from "../problem.ts";

const StreamParams = Type.Object({ id: StreamIdSchema });
const RehearsalParams = Type.Object({ rehearsal: Type.String({ format: "uuid" }) });
/** A limit set is some tens of kilobytes, and a request may hold cuts besides. */
const mostBytes = 1024 * 1024;

/** Rehearsals: started, looked at until they are done, cancelled. They change nothing on record. */
export function rehearsalRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { config, rehearsals, allowed } = parts;

  app.post<{ Params: { id: string }; Body: RehearsalRequest }>(
    "/streams/:id/rehearsals",
    { bodyLimit: mostBytes, schema: { params: StreamParams, body: RehearsalRequestSchema } },
    (request) => {
      allowed(request, "operator");
      const { id } = request.params;
      knownStream(parts, id);
      const { periodMs } = config.streams.find((stream) => stream.id === id)!;
      const rehearsal = rehearsals.start({ stream: id, periodMs, request: request.body });
      if (rehearsal !== undefined) return { rehearsal };
      throw new RequestError(503, "too-many-rehearsals", "Too many rehearsals wait already. Try again in a minute.");
    },
  );

  app.get<{ Params: { rehearsal: string } }>(
    "/rehearsals/:rehearsal",
    { schema: { params: RehearsalParams, response: { 404: ProblemSchema } } },
    ({ params }): RehearsalStanding => rehearsals.standing(params.rehearsal) ?? unknown(),
  );

  app.delete<{ Params: { rehearsal: string } }>(
    "/rehearsals/:rehearsal",
    { schema: { params: RehearsalParams, response: { 404: ProblemSchema } } },
    (request, reply) => {
      allowed(request, "operator");
      if (!rehearsals.cancel(request.params.rehearsal)) unknown();
      reply.code(204).send();
    },
  );
}

function unknown(): never {
  throw new RequestError(
    404,
    "unknown-rehearsal",
    "There is no such rehearsal: the service has been restarted, or it is long ago. Start it again.",
  );
}
