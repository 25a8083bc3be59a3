import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import {
  differences,
  type KeptLimits,
  KeptLimitsSchema,
  type LimitProposal,
  type LimitSet,
  LimitSetSchema,
} from "../../../core/limit-set/index.ts";
import {
  DoneSchema,
  LimitChangeOutcomeSchema,
  LimitSetsSchema,
  ProblemSchema,
  type RehearsalEvidence,
  StreamIdSchema,
} from "../../../core/messages/index.ts";
import type { Outcome } from "../../../core/rehearsal/index.ts";
import type { CommandOutcome, LimitCommand } from "../../engine/turn.ts";
import type { GatewayParts } from "../gateway.ts";
import { knownStream } from "../known-stream.ts";
import { RequestError } from "../problem.ts";

const Reason = Type.String({ minLength: 1, maxLength: 2000 });
const StreamParams = Type.Object({ id: StreamIdSchema });
const VersionParams = Type.Object({ id: StreamIdSchema, version: Type.Integer({ minimum: 1 }) });
const KeptParams = Type.Object({ id: StreamIdSchema, name: Type.String({ minLength: 1, maxLength: 80 }) });
const ProposalParams = Type.Object({ id: StreamIdSchema, proposal: Type.Integer({ minimum: 1 }) });
/** An alarm's words are part of a limit set: a long one is some tens of kilobytes. */
const mostBytes = 1024 * 1024;

const answers = { 200: LimitChangeOutcomeSchema, 403: ProblemSchema, 404: ProblemSchema, 409: ProblemSchema };

/** The limit sets of a stream: read, exported, changed, approved, rolled back. */
export function limitSetRoutes(app: FastifyInstance, parts: GatewayParts): void {
  const { config, store, engine, allowed } = parts;

  app.get<{ Params: { id: string } }>(
    "/streams/:id/limit-sets",
    { schema: { params: StreamParams, response: { 200: LimitSetsSchema, 404: ProblemSchema } } },
    ({ params: { id } }) => {
      knownStream(parts, id);
      const sets = store.limitSets(id);
      const [inForce] = sets;
      return {
        inForce: inForce ?? null,
        approval: config.limits?.approval ?? null,
        versions: sets.map((set, i) => aboutVersion(set, sets[i + 1])),
        proposals: store.proposals(id).map((proposal) => aboutProposal(proposal, inForce)),
      };
    },
  );

  app.get<{ Params: { id: string; version: number } }>(
    "/streams/:id/limit-sets/:version",
    { schema: { params: VersionParams, response: { 200: LimitSetSchema, 404: ProblemSchema } } },
    ({ params: { id, version } }) => versionOf(id, version),
  );

  app.post<{ Params: { id: string }; Body: { limitSet: LimitSet } }>(
    "/streams/:id/limit-sets/differences",
    { bodyLimit: mostBytes, schema: { params: StreamParams, body: Type.Object({ limitSet: LimitSetSchema }) } },
    ({ params: { id }, body: { limitSet } }) => ({ differences: differences(inForceOf(id), limitSet) }),
  );

  app.post<{ Params: { id: string }; Body: { limitSet: LimitSet; reason: string; rehearsal?: string } }>(
    "/streams/:id/limit-sets",
    {
      bodyLimit: mostBytes,
      schema: {
        params: StreamParams,
        body: Type.Object({
          limitSet: LimitSetSchema,
          reason: Reason,
          /** a rehearsal of just these limits, as evidence */
          rehearsal: Type.Optional(Type.String({ format: "uuid" })),
        }),
        response: answers,
      },
    },
    async (request) => {
      const { limitSet, reason, rehearsal } = request.body;
      const by = allowed(request, "engineer").name;
      const evidence = rehearsal === undefined ? {} : { evidence: evidenceOf(rehearsal, limitSet) };
      return ask({ kind: "change limits", stream: request.params.id, by, reason, wanted: limitSet, ...evidence });
    },
  );

  app.post<{ Params: { id: string; version: number }; Body: { reason: string } }>(
    "/streams/:id/limit-sets/:version/roll-back",
    { schema: { params: VersionParams, body: Type.Object({ reason: Reason }), response: answers } },
    async (request) => {
      const { id, version } = request.params;
      const by = allowed(request, "engineer").name;
      const old = versionOf(id, version);
      const { version: now, model } = inForceOf(id);
      if (old.model !== model) {
        const says = `Version ${version} was made for another model than the one in charge; its statistics' limits do not fit. Change the limits in force instead.`;
        throw new RequestError(409, "another-model", says);
      }
      const reason = `Back to version ${version}. ${request.body.reason}`;
      return ask({ kind: "change limits", stream: id, by, reason, wanted: { ...old, version: now } });
    },
  );

  app.post<{ Params: { id: string; proposal: number } }>(
    "/streams/:id/limit-proposals/:proposal/approve",
    { schema: { params: ProposalParams, response: answers } },
    async (request) => {
      const { id, proposal } = request.params;
      return ask({ kind: "approve limits", stream: id, by: allowed(request, "engineer").name, proposal });
    },
  );

  app.post<{ Params: { id: string; proposal: number }; Body: { reason: string } }>(
    "/streams/:id/limit-proposals/:proposal/withdraw",
    { schema: { params: ProposalParams, body: Type.Object({ reason: Reason }), response: answers } },
    async (request) => {
      const { id, proposal } = request.params;
      const { reason } = request.body;
      return ask({ kind: "withdraw limits", stream: id, by: allowed(request, "engineer").name, proposal, reason });
    },
  );

  app.get<{ Params: { id: string } }>(
    "/streams/:id/kept-limits",
    { schema: { params: StreamParams, response: { 200: Type.Object({ kept: Type.Array(KeptLimitsSchema) }) } } },
    ({ params: { id } }) => {
      knownStream(parts, id);
      return { kept: store.keptLimits(id) };
    },
  );

  app.put<{ Params: { id: string; name: string }; Body: Pick<KeptLimits, "stretch"> & { limitSet: LimitSet } }>(
    "/streams/:id/kept-limits/:name",
    {
      bodyLimit: mostBytes,
      schema: {
        params: KeptParams,
        body: Type.Object({ limitSet: LimitSetSchema, stretch: KeptLimitsSchema.properties.stretch }),
        response: { 200: DoneSchema, 404: ProblemSchema },
      },
    },
    async (request) => {
      const { id, name } = request.params;
      knownStream(parts, id);
      const by = allowed(request, "engineer").name;
      const { stretch, limitSet } = request.body;
      const { version: base, model, statistics, alarms } = limitSet;
      const kept = { name, base, model, statistics, alarms, stretch };
      await engine.command({ kind: "keep limits", stream: id, by, kept });
      return { done: true as const };
    },
  );

  app.delete<{ Params: { id: string; name: string } }>(
    "/streams/:id/kept-limits/:name",
    { schema: { params: KeptParams, response: { 200: DoneSchema, 404: ProblemSchema } } },
    async (request) => {
      const { id, name } = request.params;
      knownStream(parts, id);
      const by = allowed(request, "engineer").name;
      if (!store.keptLimits(id).some((kept) => kept.name === name)) {
        throw new RequestError(404, "no-such-limits", `${id} has no limits kept as "${name}".`);
      }
      await engine.command({ kind: "drop kept limits", stream: id, by, name });
      return { done: true as const };
    },
  );

  /** Taken from the rehearsal itself: nobody writes their own testimonial. @throws RequestError when it rehearsed other limits */
  function evidenceOf(rehearsal: string, limitSet: LimitSet): RehearsalEvidence {
    const finished = parts.rehearsals.finished(rehearsal);
    const rehearsed = finished?.result.limitSet;
    if (!finished || !rehearsed || differences(rehearsed, limitSet).length > 0) {
      const says = finished ? "rehearsed other limits than these" : "is not there any more, or not done";
      throw new RequestError(
        409,
        "no-evidence",
        `The rehearsal ${says}. Rehearse these limits and propose them again.`,
      );
    }
    const { result, job } = finished;
    const figures = ({ perDay, found, missed, causeless, longestQuietMs }: Outcome) => ({
      ...{ perDay, found, missed, causeless: causeless.length, longestQuietMs },
    });
    return {
      ...{ from: job.request.from, to: job.request.to, cuts: result.stretch.cut.length },
      ...{ readings: result.stretch.readings, days: result.inForce.days, version: result.version },
      inForce: figures(result.inForce),
      proposed: figures(result.proposed!),
    };
  }

  async function ask(command: LimitCommand): Promise<Extract<CommandOutcome, { done: true }>> {
    knownStream(parts, command.stream);
    const outcome = await engine.command(command);
    if (!outcome.done)
      throw new RequestError(409, "limits-not-changed", `The limits stay as they are: ${outcome.says}.`);
    return outcome;
  }

  function inForceOf(id: string): LimitSet {
    knownStream(parts, id);
    const inForce = store.limitSet(id);
    if (!inForce) throw new RequestError(404, "no-limit-set", `${id} has no limit set yet: it has no usable model.`);
    return inForce;
  }

  function versionOf(id: string, version: number): LimitSet {
    const newest = inForceOf(id).version;
    const found = store.limitSets(id).find((set) => set.version === version);
    if (!found)
      throw new RequestError(404, "no-such-version", `${id} has no limit set ${version}; its newest is ${newest}.`);
    return found;
  }
}

/** A version in the list: who, when, why, and in what it differs from the one before. */
function aboutVersion(set: LimitSet, before: LimitSet | undefined) {
  const { version, author, approver, reason, time, model, evidence } = set;
  return {
    ...{ version, author, reason, time, model },
    ...(approver === undefined ? {} : { approver }),
    ...(evidence ? { evidence } : {}),
    differences: before ? differences(before, set) : [],
  };
}

function aboutProposal(proposal: LimitProposal, inForce: LimitSet | undefined) {
  const { id, base, author, reason, time, evidence } = proposal;
  return {
    ...{ id, base, author, reason, time },
    ...(evidence ? { evidence } : {}),
    differences: inForce ? differences(inForce, proposal) : [],
  };
}
