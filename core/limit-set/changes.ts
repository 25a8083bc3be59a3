import { type Static, Type } from "typebox";
import { type RehearsalEvidence, RehearsalEvidenceSchema } from "../messages/index.ts";
import { type Difference, differences } from "./differences.ts";
import { AlarmRuleSchema, type LimitSet, LimitSetSchema } from "./limit-set.ts";
import { LimitSetError, parseLimitSet } from "./parse.ts";

/** A limit set that somebody wants in force. It waits where the plant asks for another person's approval. */
export const LimitProposalSchema = Type.Object({
  /** counted from 1 in each stream, never used again */
  id: Type.Integer(),
  /** the version that it was made from: it is void when another one is in force by then */
  base: Type.Integer(),
  statistics: LimitSetSchema.properties.statistics,
  alarms: Type.Array(AlarmRuleSchema),
  author: Type.String(),
  reason: Type.String(),
  evidence: Type.Optional(RehearsalEvidenceSchema),
  time: Type.Number(),
});
export type LimitProposal = Static<typeof LimitProposalSchema>;

/** What waits for approval, and how many were ever proposed. Plain data; kept with the stream's state. */
export interface Proposals {
  waiting: LimitProposal[];
  last: number;
}

export type LimitAsk =
  | { kind: "change limits"; by: string; at: number; reason: string; wanted: LimitSet; evidence?: RehearsalEvidence }
  | { kind: "approve limits"; by: string; at: number; proposal: number }
  | { kind: "withdraw limits"; by: string; at: number; proposal: number; reason: string };

export type LimitAnswer =
  | { kind: "in force"; proposals: Proposals; set: LimitSet; changes: Difference[]; says: string }
  | { kind: "waits"; proposals: Proposals; proposal: LimitProposal; says: string }
  | { kind: "withdrawn"; proposals: Proposals; says: string }
  | { kind: "rejected"; why: string };

/** What an answer rests on. */
export interface LimitSituation {
  inForce: LimitSet;
  proposals: Proposals;
  /** what the stream's model predicts */
  properties: readonly string[];
  /** the plant's settings ask that another person approves */
  approval: boolean;
}

/**
 * Decides about a change of limits: in force now, waiting for another person, or rejected with the reason. Pure. Every change is a new
 * version, a return to an old one too (management of change: who, when, from what, to what, why).
 */
export function decideLimits(ask: LimitAsk, situation: LimitSituation): LimitAnswer {
  switch (ask.kind) {
    case "change limits":
      return change(ask, situation);
    case "approve limits":
      return approve(ask, situation);
    case "withdraw limits":
      return withdraw(ask, situation);
    default:
      return ask satisfies never;
  }
}

function change(ask: Extract<LimitAsk, { kind: "change limits" }>, situation: LimitSituation): LimitAnswer {
  const { inForce, proposals, approval } = situation;
  const { wanted, by, at, reason, evidence } = ask;
  const trouble = troubleWith(wanted, reason, situation);
  if (trouble !== undefined) return { kind: "rejected", why: trouble };
  const { statistics, alarms } = wanted;
  const from = { id: proposals.last + 1, base: inForce.version };
  const shown = evidence ? { evidence } : {};
  const proposal: LimitProposal = { ...from, statistics, alarms, author: by, reason, ...shown, time: at };
  const counted = { ...proposals, last: proposal.id };
  if (!approval) return putInForce(proposal, at, { ...situation, proposals: counted });
  return {
    kind: "waits",
    proposal,
    proposals: { ...counted, waiting: [...proposals.waiting, proposal] },
    says: `${by} proposes limits (proposal ${proposal.id}, from version ${inForce.version}): ${reason}. Another person must approve.`,
  };
}

function troubleWith(wanted: LimitSet, reason: string, { inForce, properties }: LimitSituation): string | undefined {
  if (reason.trim() === "") return "a change of limits needs its reason";
  if (wanted.stream !== inForce.stream) return `the limit set is for ${wanted.stream}, expected ${inForce.stream}`;
  if (wanted.version !== inForce.version) {
    return `it was made from version ${wanted.version}, but version ${inForce.version} is in force: look at that first`;
  }
  if (wanted.model !== inForce.model) return "it was made for another model than the one in charge";
  try {
    parseLimitSet(JSON.stringify(wanted), "the limit set", properties);
  } catch (error) {
    if (error instanceof LimitSetError) return error.message;
    throw error;
  }
  return differences(inForce, wanted).length === 0 ? "it changes nothing" : undefined;
}

function approve(ask: Extract<LimitAsk, { kind: "approve limits" }>, situation: LimitSituation): LimitAnswer {
  const { inForce, proposals } = situation;
  const proposal = waitingOne(proposals, ask.proposal);
  if (typeof proposal === "string") return { kind: "rejected", why: proposal };
  if (proposal.author === ask.by)
    return { kind: "rejected", why: `${ask.by} proposed it; another person must approve` };
  if (proposal.base !== inForce.version) {
    return {
      kind: "rejected",
      why: `proposal ${proposal.id} was made from version ${proposal.base}, but version ${inForce.version} is in force by now: withdraw it and propose again`,
    };
  }
  return putInForce(proposal, ask.at, situation, ask.by);
}

function withdraw(ask: Extract<LimitAsk, { kind: "withdraw limits" }>, { proposals }: LimitSituation): LimitAnswer {
  const proposal = waitingOne(proposals, ask.proposal);
  if (typeof proposal === "string") return { kind: "rejected", why: proposal };
  return {
    kind: "withdrawn",
    proposals: without(proposals, proposal.id),
    says: `${ask.by} withdraws proposal ${proposal.id} of ${proposal.author}: ${ask.reason || "no reason given"}.`,
  };
}

function putInForce(proposal: LimitProposal, at: number, situation: LimitSituation, approver?: string): LimitAnswer {
  const { inForce, proposals } = situation;
  const { statistics, alarms, author, reason, evidence } = proposal;
  const set: LimitSet = {
    ...inForce,
    version: inForce.version + 1,
    ...{ statistics, alarms, author, reason, time: at },
  };
  // Approver and evidence of the version before are not this one's.
  delete set.approver;
  delete set.evidence;
  if (approver !== undefined) set.approver = approver;
  if (evidence) set.evidence = evidence;
  const changes = differences(inForce, set);
  const by = approver === undefined ? author : `${author}, approved by ${approver}`;
  return {
    kind: "in force",
    set,
    changes,
    proposals: without(proposals, proposal.id),
    says: `Limit set ${set.version} instead of ${inForce.version}, by ${by}: ${reason}. ${changesInWords(changes)}`,
  };
}

/** All of them, in a line. */
export function changesInWords(changes: readonly Difference[]): string {
  return changes
    .map(({ what, before, after }) => {
      if (before === undefined) return `${what}: new, ${after}`;
      return after === undefined ? `${what}: gone, was ${before}` : `${what}: ${before} → ${after}`;
    })
    .join("; ");
}

function waitingOne({ waiting }: Proposals, id: number): LimitProposal | string {
  const found = waiting.find((proposal) => proposal.id === id);
  if (found) return found;
  return `no proposal ${id} waits; ${waiting.length === 0 ? "none does" : `these do: ${waiting.map((one) => one.id).join(", ")}`}`;
}

function without(proposals: Proposals, id: number): Proposals {
  return { ...proposals, waiting: proposals.waiting.filter((proposal) => proposal.id !== id) };
}
