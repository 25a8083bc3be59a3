import type { IncomingMessage } from "node:http";
import type { FastifyInstance, FastifyReply } from "fastify";
import { type Static, Type } from "typebox";
import { parseLabTable } from "../../../core/agreement/index.ts";
import {
  AgreementSchema,
  CorrectLabSchema,
  DoneSchema,
  type LabImport,
  LabImportSchema,
  LabMessageSchema,
  LabResultsSchema,
  type LabRow,
  ProblemSchema,
  StreamIdSchema,
  WithdrawLabSchema,
} from "../../../core/messages/index.ts";
import { labEntryOf } from "../../engine/decode-lab.ts";
import type { EnteredRow, LabCommand } from "../../engine/laboratory.ts";
import { agreementView } from "../agreement-view.ts";
import type { GatewayParts } from "../gateway.ts";
import { knownStream } from "../known-stream.ts";
import { RequestError } from "../problem.ts";

const Params = Type.Object({ id: StreamIdSchema });
interface Asked {
  Params: { id: string };
}
const Query = Type.Object({
  from: Type.Integer({ default: 0 }),
  to: Type.Integer({ default: Number.MAX_SAFE_INTEGER }),
  property: Type.Optional(Type.String()),
});
const problems = { 400: ProblemSchema, 403: ProblemSchema, 404: ProblemSchema, 409: ProblemSchema };
/** Twenty thousand rows of a hundred characters. */
const mostBytes = 2 * 1024 * 1024;

/** Results of the laboratory of one stream, and how the model agrees with them. */
export function laboratoryRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { store, engine, allowed } = parts;

  app.get<Asked & { Querystring: { from: number; to: number; property?: string } }>(
    "/streams/:id/lab",
    { schema: { params: Params, querystring: Query, response: { 200: LabResultsSchema, ...problems } } },
    ({ params: { id }, query }) => {
      knownStream(parts, id);
      return { results: store.labResults({ stream: id, ...query }) };
    },
  );

  app.get<Asked & { Querystring: { from: number; to: number; property: string } }>(
    "/streams/:id/agreement",
    {
      schema: {
        params: Params,
        querystring: Type.Object({ ...Query.properties, property: Type.String() }),
        response: { 200: AgreementSchema, ...problems },
      },
    },
    ({ params: { id }, query }) => {
      knownStream(parts, id);
      const found = agreementView(parts, { stream: id, ...query });
      if (found) return found;
      const names = parts.propertiesOf(id).join(", ") || "none: it has no model";
      throw new RequestError(404, "unknown-property", `${id} predicts no ${query.property}; it predicts ${names}.`);
    },
  );

  app.post<Asked & { Body: unknown }>(
    "/streams/:id/lab",
    {
      // The body's schema describes; it is checked below, as a row of a table is, and no number becomes a text on the way.
      validatorCompiler: () => () => true,
      schema: {
        params: Params,
        body: LabMessageSchema,
        response: { 200: LabImportSchema, 422: LabImportSchema, ...problems },
      },
    },
    async (request, reply) => {
      const { id } = request.params;
      const { name } = allowed(request, "operator");
      knownStream(parts, id);
      return enter({ stream: id, rows: [rowOf(1, request.body)], origin: "form", by: name }, reply);
    },
  );

  // The parser of text/csv hands the body over as it comes: load.ts.
  app.post<Asked & { Body: IncomingMessage }>(
    "/streams/:id/lab/table",
    {
      bodyLimit: mostBytes,
      schema: {
        params: Params,
        response: { 200: LabImportSchema, 422: LabImportSchema, 415: ProblemSchema, ...problems },
      },
    },
    async (request, reply) => {
      const { id } = request.params;
      const { name } = allowed(request, "engineer");
      knownStream(parts, id);
      if (!(request.headers["content-type"] ?? "").startsWith("text/csv")) {
        throw new RequestError(415, "not-a-table", "Send the table as text/csv.");
      }
      const table = parseLabTable(await textOf(request.body));
      if (table.kind === "unreadable") throw new RequestError(400, "wrong-table", `The table: ${table.says}`);
      const rows = table.rows.map((each) => ("refused" in each ? each : rowOf(each.row, each.fields)));
      return enter({ stream: id, rows, origin: "table", by: name }, reply);
    },
  );

  app.post<Asked & { Body: Static<typeof CorrectLabSchema> }>(
    "/streams/:id/lab/correct",
    { schema: { params: Params, body: CorrectLabSchema, response: { 200: DoneSchema, ...problems } } },
    (request) => {
      const { name: by } = allowed(request, "engineer");
      knownStream(parts, request.params.id);
      return change({ kind: "correct lab result", stream: request.params.id, ...request.body, by });
    },
  );

  app.post<Asked & { Body: Static<typeof WithdrawLabSchema> }>(
    "/streams/:id/lab/withdraw",
    { schema: { params: Params, body: WithdrawLabSchema, response: { 200: DoneSchema, ...problems } } },
    (request) => {
      const { name: by } = allowed(request, "engineer");
      knownStream(parts, request.params.id);
      return change({ kind: "withdraw lab result", stream: request.params.id, ...request.body, by });
    },
  );

  async function enter(
    command: Omit<Extract<LabCommand, { kind: "enter lab results" }>, "kind">,
    reply: FastifyReply,
  ): Promise<LabImport> {
    const { done, rows = [] } = await engine.command({ kind: "enter lab results", ...command });
    if (!done) reply.code(422);
    const count = (outcome: LabRow["outcome"]) => rows.filter((row) => row.outcome === outcome).length;
    return {
      done,
      accepted: done ? count("accepted") : 0,
      repeated: count("already there"),
      refused: count("refused"),
      rows,
    };
  }

  async function change(command: LabCommand) {
    const outcome = await engine.command(command);
    if (!outcome.done) throw new RequestError(409, "not-changed", `${outcome.says}.`);
    return { done: true as const };
  }
}

function rowOf(row: number, fields: unknown): EnteredRow {
  const decoded = labEntryOf(fields);
  return decoded.kind === "result" ? { row, entry: decoded.entry } : { row, refused: `${decoded.says}.` };
}

/** @throws RequestError 413 for a body that is larger than a table of results ever is */
async function textOf(body: IncomingMessage): Promise<string> {
  const chunks: Buffer[] = [];
  let bytes = 0;
  for await (const chunk of body as AsyncIterable<Buffer>) {
    bytes += chunk.length;
    if (bytes > mostBytes)
      throw new RequestError(413, "too-large", `The table is larger than ${mostBytes} bytes. Cut it.`);
    chunks.push(chunk);
  }
  return Buffer.concat(chunks).toString("utf8");
}
