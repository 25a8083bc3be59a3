import { excursionFrom, excursionId, excursionOf, type OpenExcursion } from "../alarms/index.ts";
import type { Excursion, ExcursionLabel } from "../messages/index.ts";
import type { StreamRules } from "./judge.ts";
import type { Note } from "./notes.ts";
import type { StreamState } from "./state.ts";

/** What a person knows of an excursion: a label, a note, or both. */
export interface ExcursionCommand {
  kind: "label excursion";
  /** its kind and start; with the stream they are its identity */
  excursion: string;
  start: number;
  label?: ExcursionLabel;
  note?: string;
  /** wall clock, epoch ms */
  at: number;
  by: string;
}

/**
 * Puts a label or a note to an excursion, open or past. A label may be replaced by another; the record keeps both. Pure.
 *
 * @param recorded finds an excursion on record by its id
 */
export function labelExcursion(
  state: StreamState,
  command: ExcursionCommand,
  recorded: (id: string) => Excursion | undefined,
  rules: StreamRules,
): { state: StreamState; notes: Note[]; excursions: Excursion[]; rejected?: string } {
  const { excursion: kind, start, by, at } = command;
  const id = excursionId(rules.stream, kind, start);
  const open = state.excursions[kind];
  if (open?.start === start && open.readings >= excursionFrom) {
    const labelled = told(open, command);
    const excursion = excursionOf(rules.stream, kind, labelled);
    const next = { ...state, excursions: { ...state.excursions, [kind]: labelled } };
    return { state: next, notes: [noteOf(excursion, open.label, command)], excursions: [excursion] };
  }
  const past = recorded(id);
  if (!past) {
    const rejected = `${rules.stream} has no excursion "${kind}" that began at ${new Date(start).toISOString()}`;
    const says = `label by ${by} rejected: ${rejected}.`;
    const note = { at, stream: rules.stream, kind: "command rejected", says, by };
    return { state, notes: [note], excursions: [], rejected };
  }
  const excursion = told(past, command);
  return { state, notes: [noteOf(excursion, past.label, command)], excursions: [excursion] };
}

function told<T extends Pick<OpenExcursion, "label" | "notes">>(excursion: T, command: ExcursionCommand): T {
  const { label, note, by, at } = command;
  return {
    ...excursion,
    ...(label ? { label: { is: label, by, at } } : {}),
    ...(note ? { notes: [...(excursion.notes ?? []), { says: note, by, at }] } : {}),
  };
}

function noteOf(excursion: Excursion, before: Excursion["label"], { label, note, by, at }: ExcursionCommand): Note {
  const { stream, kind, start } = excursion;
  const was = before ? `, before: ${before.is} by ${before.by}` : "";
  const named = label ? `labelled "${label}" by ${by}${was}` : `note by ${by}`;
  return {
    at,
    stream,
    kind: label ? "excursion labelled" : "excursion noted",
    says: `${kind} of ${new Date(start).toISOString()}: ${named}${note ? `: ${note}` : ""}.`,
    by,
    excursion,
  };
}
