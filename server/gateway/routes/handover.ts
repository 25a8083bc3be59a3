import type { FastifyInstance } from "fastify";
import { type Static, Type } from "typebox";
import { drawn } from "../../../core/handover/index.ts";
import {
  BoundRecordSchema,
  HandoverShiftsSchema,
  ProblemSchema,
  SaidSchema,
  type Shift,
  SignShiftSchema,
  WriteToShiftSchema,
  WrittenSchema,
} from "../../../core/messages/index.ts";
import { handoverStanding } from "../../../core/shift-page/index.ts";
import type { HandoverCommand } from "../../engine/handover-command.ts";
import {
  type RecordFormat,
  recordFile,
  recordFileName,
  recordFormats,
  recordTypes,
} from "../../handover/record-file.ts";
import { ShiftBook } from "../../handover/shift-book.ts";
import { inventedPeople, inventedPerson } from "../../people/invented.ts";
import { mayAct } from "../../people/person.ts";
import type { GatewayParts } from "../gateway.ts";
import { RequestError } from "../problem.ts";
import { AroundSchema, following } from "./shifts.ts";

const At = Type.Object({ at: Type.Optional(AroundSchema) });
const problems = { 400: ProblemSchema, 401: ProblemSchema, 403: ProblemSchema, 409: ProblemSchema, 429: ProblemSchema };

/** The records of shifts: read, exported, searched, written to and signed. */
export function handoverRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { config, store, explainer, engine, allowed, people, passwords } = parts;
  const book = new ShiftBook(config, store, explainer);
  /** In the invented plant nobody needs to sign in, and two invented people sign. */
  const invented = () => config.demo === true && people.isEmpty();

  app.get<{ Querystring: { before?: number; count: number } }>(
    "/handover/shifts",
    {
      schema: {
        querystring: Type.Object({
          before: Type.Optional(AroundSchema),
          count: Type.Integer({ minimum: 1, maximum: 200, default: 30 }),
        }),
        response: { 200: HandoverShiftsSchema },
      },
    },
    ({ query: { before = Date.now(), count } }) => {
      const last = book.calendar.at(before);
      const shifts = [last, ...following(last, count - 1, book.calendar.before)];
      const signatures = store.handover.signatures(shifts[shifts.length - 1].from, last.to);
      return {
        shifts: shifts.map((shift) => {
          const own = signatures.filter((each) => each.shift === shift.from);
          const { is, outgoing, incoming } = handoverStanding(own);
          return { shift, is, outgoing: outgoing?.by, incoming: incoming?.by };
        }),
        invented: invented() ? inventedPeople.map(({ name, password }) => ({ name, password })) : [],
      };
    },
  );

  app.get<{ Querystring: { at?: number } }>(
    "/handover/record",
    { schema: { querystring: At, response: { 200: BoundRecordSchema, 400: ProblemSchema } } },
    ({ query: { at } }) => book.bound(shiftAt(at), Date.now()),
  );

  app.get<{ Querystring: { at?: number }; Params: { format: RecordFormat } }>(
    "/handover/record/:format",
    { schema: { querystring: At, params: Type.Object({ format: Type.Enum(recordFormats) }) } },
    ({ query: { at }, params: { format } }, reply) => {
      const bound = book.bound(shiftAt(at), Date.now());
      reply.header("content-type", recordTypes[format]);
      reply.header("content-disposition", `attachment; filename="${recordFileName(bound, format)}"`);
      // As text: it is serialised already.
      return reply.serializer((text) => text as string).send(recordFile(bound, format));
    },
  );

  app.get<{ Querystring: { words: string; limit: number } }>(
    "/handover/search",
    {
      schema: {
        querystring: Type.Object({
          words: Type.String({ minLength: 1, maxLength: 200 }),
          limit: Type.Integer({ minimum: 1, maximum: 500, default: 100 }),
        }),
        response: { 200: SaidSchema },
      },
    },
    ({ query: { words, limit } }) => store.handover.said(words, limit),
  );

  app.post<{ Body: Static<typeof WriteToShiftSchema> }>(
    "/handover/entries",
    { schema: { body: WriteToShiftSchema, response: { 200: WrittenSchema, ...problems } } },
    async (request) => {
      const { name } = allowed(request, "operator");
      const { shift, write } = request.body;
      return ask({ ...write, shift: shiftAt(shift), by: name });
    },
  );

  app.post<{ Body: Static<typeof SignShiftSchema> }>(
    "/handover/signatures",
    { schema: { body: SignShiftSchema, response: { 200: WrittenSchema, ...problems } } },
    async (request) => {
      allowed(request, "operator");
      const { side, seen } = request.body;
      const signer = await passwords.pass(request, request.body, { what: "signature", check: signerOf });
      if (!mayAct(signer, "operator")) {
        throw new RequestError(
          403,
          "may-not-sign",
          `${signer.name} is ${signer.role}; signing a shift needs operator.`,
        );
      }
      const shift = shiftAt(request.body.shift);
      const sign = { kind: "sign" as const, role: signer.role, seen, shift, by: signer.name };
      if (side === "incoming") return ask({ ...sign, side });
      const record = book.draw(shift, Date.now());
      return ask({ ...sign, side, record: drawn(record), to: record.to });
    },
  );

  function shiftAt(at: number = Date.now()): Shift {
    return book.calendar.at(at);
  }

  function signerOf(name: string, password: string) {
    if (invented()) return inventedPerson(name, password);
    if (!people.isEmpty()) return people.check(name, password);
    const says =
      "Nobody is known here by name and password. Add people: millrace user add NAME --role operator --config plant.json";
    throw new RequestError(409, "nobody-can-sign", says);
  }

  async function ask(wish: HandoverCommand["ask"]) {
    const outcome = await engine.command({ kind: "handover", ask: wish });
    if (!outcome.done) throw new RequestError(409, "not-written", `${outcome.says}.`);
    return outcome;
  }
}
