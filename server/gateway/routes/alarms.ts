import type { FastifyInstance, FastifyRequest } from "fastify";
import { type Static, type TSchema, Type } from "typebox";
import { performanceOf, type Remark } from "../../../core/alarms/index.ts";
import {
  AcknowledgeSchema,
  DoneSchema,
  PerformanceSchema,
  ProblemSchema,
  ShelveSchema,
  StreamIdSchema,
  TakeOutOfServiceSchema,
} from "../../../core/messages/index.ts";
import type { StreamCommand } from "../../engine/stream-command.ts";
import type { Role } from "../../people/person.ts";
import type { GatewayParts } from "../gateway.ts";
import { knownStream } from "../known-stream.ts";
import { RequestError } from "../problem.ts";

const AlarmParams = Type.Object({ id: StreamIdSchema, key: StreamIdSchema });
type AlarmParams = Static<typeof AlarmParams>;

const PerformanceQuery = Type.Object({
  from: Type.Integer(),
  to: Type.Integer(),
  /** count what recorded history brought in, too, as if it had been annunciated */
  history: Type.Boolean({ default: false }),
});

const minute = 60_000;
/** How far back from the beginning an alarm may have been raised and still be known to stand there. */
const lookBackMs = 30 * 24 * 3_600_000;
const longestMs = 400 * 24 * 3_600_000;

/** What each command without further ado is called on its way in, and who may give it. */
const remarks: { path: string; kind: Remark["kind"]; needed: Role; code: string }[] = [
  { path: "acknowledge", kind: "acknowledge", needed: "operator", code: "not-acknowledged" },
  { path: "reset", kind: "reset", needed: "operator", code: "not-reset" },
  { path: "unshelve", kind: "unshelve", needed: "operator", code: "not-unshelved" },
  { path: "return-to-service", kind: "return to service", needed: "engineer", code: "not-returned" },
];

/** How well the alarm system does, and what a person does to an alarm: POST /streams/:id/alarms/:key/… */
export function alarmRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { engine, store, allowed } = parts;

  app.get<{ Querystring: Static<typeof PerformanceQuery> }>(
    "/alarms/performance",
    { schema: { querystring: PerformanceQuery, response: { 200: PerformanceSchema, 400: ProblemSchema } } },
    ({ query: { from, to, history } }) => {
      if (to <= from) {
        throw new RequestError(400, "empty-range", `to is ${to}, expected a time after from, ${from} (epoch ms).`);
      }
      if (to - from > longestMs) {
        throw new RequestError(
          400,
          "range-too-long",
          "from and to are more than 400 days apart; ask for less at a time.",
        );
      }
      return performanceOf(store.alarmEvents({ from: from - lookBackMs, to, history }), { from, to });
    },
  );

  /** A command's route: the body checked, then the role, then the engine asked; 409 with its reason when it rejects. */
  function post<Body extends TSchema>(
    path: string,
    body: Body,
    { needed, code }: { needed: Role; code: string },
    command: (body: Static<Body>, to: { stream: string; key: string; by: string }) => StreamCommand,
  ): void {
    app.post<{ Params: AlarmParams; Body: Static<Body> }>(
      `/streams/:id/alarms/:key/${path}`,
      {
        schema: {
          params: AlarmParams,
          body,
          response: { 200: DoneSchema, 400: ProblemSchema, 403: ProblemSchema, 404: ProblemSchema, 409: ProblemSchema },
        },
      },
      async (request) => {
        const { id, key } = request.params as AlarmParams;
        knownStream(parts, id);
        const { name } = allowed(request as FastifyRequest, needed);
        const outcome = await engine.command(command(request.body as Static<Body>, { stream: id, key, by: name }));
        if (!outcome.done) throw new RequestError(409, code, `${outcome.says}.`);
        return outcome;
      },
    );
  }

  for (const { path, kind, ...who } of remarks) {
    post(path, Type.Union([AcknowledgeSchema, Type.Null()]), who, (body, to) => ({ kind, ...to, note: body?.note }));
  }
  post("shelve", ShelveSchema, { needed: "operator", code: "not-shelved" }, ({ reason, minutes }, to) => ({
    kind: "shelve",
    ...to,
    reason,
    ...(minutes === undefined ? {} : { forMs: minutes * minute }),
  }));
  post(
    "out-of-service",
    TakeOutOfServiceSchema,
    { needed: "engineer", code: "not-taken-out-of-service" },
    ({ reason, until }, to) => ({
      kind: "take out of service",
      ...to,
      reason,
      ...(until === undefined ? {} : { until }),
    }),
  );
}
