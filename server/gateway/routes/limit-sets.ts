import type { FastifyInstance } from "fastify";
import { Type } from "typebox";
import { differences, type LimitProposal, type LimitSet, LimitSetSchema } from "../../../core/limit-set/index.ts";
import {
  LimitChangeOutcomeSchema,
  LimitSetsSchema,
  ProblemSchema,
  StreamIdSchema,
} from "../../../core/messages/index.ts";
import type { CommandOutcome, LimitCommand } from "../../engine/turn.ts";
import type { GatewayParts } from "../gateway.ts";
import { knownStream } from "../known-stream.ts";
import { RequestError } from "../problem.ts";

const Reason = Type.String({ minLength: 1, maxLength: 2000 });
const StreamParams = Type.Object({ id: StreamIdSchema });
const VersionParams = Type.Object({ id: StreamIdSchema, version: Type.Integer({ minimum: 1 }) });
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

  app.post<{ Params: { id: string }; Body: { limitSet: LimitSet; reason: string } }>(
    "/streams/:id/limit-sets",
    {
      bodyLimit: mostBytes,
      schema: {
        params: StreamParams,
        body: Type.Object({ limitSet: LimitSetSchema, reason: Reason }),
        response: answers,
      },
    },
    async (request) => {
      const { limitSet, reason } = request.body;
      const by = allowed(request, "engineer").name;
      return ask({ kind: "change limits", stream: request.params.id, by, reason, wanted: limitSet });
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
  const { version, author, approver, reason, time, model } = set;
  return {
    ...{ version, author, reason, time, model },
    ...(approver === undefined ? {} : { approver }),
    differences: before ? differences(before, set) : [],
  };
}

function aboutProposal(proposal: LimitProposal, inForce: LimitSet | undefined) {
  const { id, base, author, reason, time } = proposal;
  return { id, base, author, reason, time, differences: inForce ? differences(inForce, proposal) : [] };
}
