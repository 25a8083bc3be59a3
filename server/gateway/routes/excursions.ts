import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import {
  DoneSchema,
  type ExcursionLabel,
  LabelExcursionSchema,
  NoteExcursionSchema,
  ProblemSchema,
  StreamIdSchema,
} from "../../../core/messages/index.ts";
import type { GatewayParts } from "../gateway.ts";
import { knownStream } from "../known-stream.ts";
import { RequestError } from "../problem.ts";

/** An excursion is known by its stream, its kind and its start (epoch ms). */
const ExcursionParams = Type.Object({ id: StreamIdSchema, kind: StreamIdSchema, start: Type.Integer() });
interface Asked {
  Params: { id: string; kind: string; start: number };
}
const response = { 200: DoneSchema, 400: ProblemSchema, 403: ProblemSchema, 404: ProblemSchema, 409: ProblemSchema };

/** What people know of an excursion: POST /streams/:id/excursions/:kind/:start/label and …/notes */
export function excursionRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { engine, allowed } = parts;

  async function tell(
    { id: stream, kind: excursion, start }: Asked["Params"],
    by: string,
    told: { label?: ExcursionLabel; note?: string },
  ) {
    const outcome = await engine.command({ kind: "label excursion", stream, excursion, start, by, ...told });
    if (!outcome.done) throw new RequestError(409, "not-labelled", `${outcome.says}.`);
    return outcome;
  }

  app.post<Asked & { Body: { label: ExcursionLabel; note?: string } }>(
    "/streams/:id/excursions/:kind/:start/label",
    { schema: { params: ExcursionParams, body: LabelExcursionSchema, response } },
    (request) => {
      knownStream(parts, request.params.id);
      return tell(request.params, allowed(request, "operator").name, request.body);
    },
  );

  app.post<Asked & { Body: { note: string } }>(
    "/streams/:id/excursions/:kind/:start/notes",
    { schema: { params: ExcursionParams, body: NoteExcursionSchema, response } },
    (request) => {
      knownStream(parts, request.params.id);
      return tell(request.params, allowed(request, "operator").name, request.body);
    },
  );
}
