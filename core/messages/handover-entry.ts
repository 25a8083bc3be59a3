import { type Static, Type } from "typebox";

const Says = Type.String({ minLength: 1, maxLength: 2000 });
const PersonName = Type.String({ minLength: 1, maxLength: 200 });

/** What a note speaks of. */
export const NoteSubjectSchema = Type.Union([
  Type.Object({ kind: Type.Literal("shift") }),
  Type.Object({ kind: Type.Literal("stream"), stream: Type.String() }),
  /** by the excursion's own id */
  Type.Object({ kind: Type.Literal("excursion"), stream: Type.String(), id: Type.String() }),
  Type.Object({ kind: Type.Literal("alarm"), stream: Type.String(), key: Type.String() }),
]);
export type NoteSubject = Static<typeof NoteSubjectSchema>;

/** What a person gives when they write to a shift's record. */
export const WriteSchema = Type.Union([
  Type.Object({ kind: Type.Literal("note"), about: NoteSubjectSchema, says: Says }),
  /** something for the shifts to come, until somebody closes it; `due`: epoch ms */
  Type.Object({
    kind: Type.Literal("action"),
    says: Says,
    owner: PersonName,
    due: Type.Optional(Type.Integer()),
  }),
  /** `refers`: the action's number */
  Type.Object({ kind: Type.Literal("action closed"), refers: Type.Integer(), says: Type.Optional(Says) }),
  Type.Object({
    kind: Type.Literal("check"),
    check: Type.String(),
    outcome: Type.Enum(["done", "not done"] as const),
    says: Type.Optional(Says),
  }),
  /** of the incoming side, once the outgoing has signed */
  Type.Object({ kind: Type.Literal("question"), says: Says }),
  Type.Object({ kind: Type.Literal("objection"), says: Says }),
  /** `refers`: the number of the question or objection */
  Type.Object({ kind: Type.Literal("answer"), refers: Type.Integer(), says: Says }),
]);
export type Write = Static<typeof WriteSchema>;

export const signingSides = ["outgoing", "incoming"] as const;
export const SigningSideSchema = Type.Enum(signingSides);
export type SigningSide = (typeof signingSides)[number];

/** A signature: printed name, time and what it means (21 CFR §11.50), for exactly the record that has this hash (§11.70). */
export const SignatureSchema = Type.Object({
  kind: Type.Literal("signature"),
  side: SigningSideSchema,
  role: Type.String(),
  meaning: Type.String(),
  /** SHA-256 of the record's canonical JSON */
  hash: Type.String(),
});

/** What every entry has. Its number is that of its event: entries are never changed, a correction is one more. */
const EntryHeadSchema = Type.Object({
  number: Type.Integer(),
  /** the beginning of the shift that it belongs to, epoch ms */
  shift: Type.Number(),
  /** wall clock of the server, epoch ms */
  at: Type.Number(),
  by: Type.String(),
  /** written after both sides had signed: it stands beside the frozen record */
  amends: Type.Optional(Type.Literal(true)),
  /** the clock stood so much earlier, ms, than at the entry before: it had been set back, and the number tells the order */
  clockBackMs: Type.Optional(Type.Number()),
});
export type EntryHead = Static<typeof EntryHeadSchema>;
export const HandoverEntrySchema = Type.Intersect([
  EntryHeadSchema,
  Type.Union([...WriteSchema.anyOf, SignatureSchema]),
]);
type Written = Write | Static<typeof SignatureSchema>;
export type HandoverEntry = EntryHead & Written;
export type EntryOf<Kind extends Written["kind"]> = Extract<HandoverEntry, { kind: Kind }>;
