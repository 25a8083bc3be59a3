import type { KeptLimits, LimitSet } from "../../core/limit-set/index.ts";
import type {
  Agreement,
  BoundRecord,
  Excursion,
  ExcursionLabel,
  HandoverShifts,
  KeptSettings,
  LabIdentity,
  LabImport,
  LabMessage,
  LabResults,
  LimitChangeOutcome,
  LimitSets,
  OpenAlarm,
  Performance,
  Plant,
  Problem,
  ReadingView,
  RecordedEvent,
  Refusals,
  Said,
  Settings,
  Shifts,
  SigningSide,
  Trend,
  Write,
} from "../../core/messages/index.ts";
import type { RehearsalRequest, RehearsalStanding } from "../../core/rehearsal/index.ts";

/** The server said no, or could not be asked. `message` is for people: what happened and what to do. */
export class ApiError extends Error {
  readonly code: string;
  readonly status: number;
  constructor(code: string, status: number, says: string, cause?: unknown) {
    super(says, { cause });
    this.code = code;
    this.status = status;
  }
}

async function problemOf(response: Response): Promise<ApiError> {
  const text = await response.text();
  try {
    const problem = JSON.parse(text) as Partial<Problem>;
    if (problem.says) return new ApiError(problem.code ?? "refused", response.status, problem.says);
  } catch {
    // Not ours: something between the browser and the server answered.
  }
  return new ApiError("http", response.status, `The server answered ${response.status} ${response.statusText}.`);
}

/** @param answers besides 200: status codes whose body is an answer, not a problem */
async function ask<T>(path: string, init?: RequestInit, answers: readonly number[] = []): Promise<T> {
  let response: Response;
  try {
    response = await fetch(`/api/v1${path}`, init);
  } catch (cause) {
    if (init?.signal?.aborted) throw cause;
    throw new ApiError("unreachable", 0, "The server could not be reached. It is asked again by itself.", cause);
  }
  if (!response.ok && !answers.includes(response.status)) throw await problemOf(response);
  return (response.status === 204 ? undefined : await response.json()) as T;
}

function query(values: Record<string, string | number | undefined>): string {
  const entries = Object.entries(values).filter(([, value]) => value !== undefined);
  return entries.length ? `?${new URLSearchParams(entries.map(([name, value]) => [name, String(value)]))}` : "";
}

const stream = (id: string) => `/streams/${encodeURIComponent(id)}`;

const asJson = (body: unknown): RequestInit => ({
  method: "POST",
  headers: { "content-type": "application/json" },
  body: JSON.stringify(body),
});

type AlarmName = Pick<OpenAlarm, "stream" | "key">;
const alarmPath = ({ stream: id, key }: AlarmName) => `${stream(id)}/alarms/${encodeURIComponent(key)}`;

/** The reads and commands of the HTTP API, as the screens need them. */
export const api = {
  plant: () => ask<Plant>("/plant"),
  trend: (id: string, from: number, to: number, points: number, signal?: AbortSignal) =>
    ask<Trend>(`${stream(id)}/trend${query({ from: Math.floor(from), to: Math.ceil(to), points })}`, { signal }),
  reading: (id: string, at: number | undefined, signal?: AbortSignal) =>
    ask<ReadingView>(`${stream(id)}/reading${query({ at })}`, { signal }),
  excursions: (values: { stream?: string; from?: number; to?: number; limit?: number }, signal?: AbortSignal) =>
    ask<{ excursions: Excursion[] }>(`/excursions${query(values)}`, { signal }),
  events: (values: { stream?: string; about?: string; before?: number; limit?: number }, signal?: AbortSignal) =>
    ask<{ events: RecordedEvent[] }>(`/events${query(values)}`, { signal }),
  refusals: (limit: number, signal?: AbortSignal) => ask<Refusals>(`/refusals${query({ limit })}`, { signal }),
  /** what needs nothing but the word: see server's alarm routes */
  alarmCommand: (alarm: AlarmName, command: "acknowledge" | "reset" | "unshelve" | "return-to-service") =>
    ask<unknown>(`${alarmPath(alarm)}/${command}`, asJson({})),
  /** without `minutes` for the present activation only */
  shelve: (alarm: AlarmName, wish: { reason: string; minutes?: number }) =>
    ask<unknown>(`${alarmPath(alarm)}/shelve`, asJson(wish)),
  labelExcursion: ({ stream: id, kind, start }: Pick<Excursion, "stream" | "kind" | "start">, label: ExcursionLabel) =>
    ask<unknown>(`${stream(id)}/excursions/${encodeURIComponent(kind)}/${start}/label`, asJson({ label })),
  noteExcursion: ({ stream: id, kind, start }: Pick<Excursion, "stream" | "kind" | "start">, note: string) =>
    ask<unknown>(`${stream(id)}/excursions/${encodeURIComponent(kind)}/${start}/notes`, asJson({ note })),
  alarmPerformance: (values: { from: number; to: number; history: boolean }, signal?: AbortSignal) =>
    ask<Performance>(
      `/alarms/performance${query({ from: Math.floor(values.from), to: Math.ceil(values.to), history: String(values.history) })}`,
      { signal },
    ),
  takeOutOfService: (alarm: AlarmName, reason: string) =>
    ask<unknown>(`${alarmPath(alarm)}/out-of-service`, asJson({ reason })),
  limitSets: (id: string, signal?: AbortSignal) => ask<LimitSets>(`${stream(id)}/limit-sets`, { signal }),
  limitDifferences: (id: string, limitSet: LimitSet) =>
    ask<Pick<LimitSets["versions"][number], "differences">>(
      `${stream(id)}/limit-sets/differences`,
      asJson({ limitSet }),
    ),
  /** `rehearsal`: one of just these limits, as evidence */
  changeLimits: (id: string, limitSet: LimitSet, reason: string, rehearsal?: string) =>
    ask<LimitChangeOutcome>(`${stream(id)}/limit-sets`, asJson({ limitSet, reason, rehearsal })),
  rehearse: (id: string, request: RehearsalRequest) =>
    ask<{ rehearsal: string }>(`${stream(id)}/rehearsals`, asJson(request)),
  rehearsal: (rehearsal: string) => ask<RehearsalStanding>(`/rehearsals/${rehearsal}`),
  cancelRehearsal: (rehearsal: string) => ask<void>(`/rehearsals/${rehearsal}`, { method: "DELETE" }),
  keptLimits: (id: string, signal?: AbortSignal) =>
    ask<{ kept: KeptLimits[] }>(`${stream(id)}/kept-limits`, { signal }),
  keepLimits: (id: string, name: string, limitSet: LimitSet, stretch: KeptLimits["stretch"]) =>
    ask<unknown>(`${stream(id)}/kept-limits/${encodeURIComponent(name)}`, {
      ...asJson({ limitSet, stretch }),
      method: "PUT",
    }),
  dropKeptLimits: (id: string, name: string) =>
    ask<unknown>(`${stream(id)}/kept-limits/${encodeURIComponent(name)}`, { method: "DELETE" }),
  rollBackLimits: (id: string, version: number, reason: string) =>
    ask<LimitChangeOutcome>(`${stream(id)}/limit-sets/${version}/roll-back`, asJson({ reason })),
  approveLimits: (id: string, proposal: number) =>
    ask<LimitChangeOutcome>(`${stream(id)}/limit-proposals/${proposal}/approve`, { method: "POST" }),
  withdrawLimits: (id: string, proposal: number, reason: string) =>
    ask<LimitChangeOutcome>(`${stream(id)}/limit-proposals/${proposal}/withdraw`, asJson({ reason })),
  agreement: (id: string, values: { property: string; from: number; to: number }, signal?: AbortSignal) =>
    ask<Agreement>(`${stream(id)}/agreement${query(values)}`, { signal }),
  /** 422: rows were refused, and nothing was taken; the answer says which and why */
  enterLab: (id: string, result: LabMessage) => ask<LabImport>(`${stream(id)}/lab`, asJson(result), [422]),
  importLab: (id: string, table: string) => {
    const init = { method: "POST", headers: { "content-type": "text/csv" }, body: table };
    return ask<LabImport>(`${stream(id)}/lab/table`, init, [422]);
  },
  correctLab: (id: string, change: { result: LabIdentity; value: number; reason: string }) =>
    ask<unknown>(`${stream(id)}/lab/correct`, asJson(change)),
  withdrawLab: (id: string, change: { result: LabIdentity; reason: string }) =>
    ask<unknown>(`${stream(id)}/lab/withdraw`, asJson(change)),
  shifts: (signal?: AbortSignal) => ask<Shifts>("/shifts", { signal }),
  lab: (id: string, from: number, to: number, signal?: AbortSignal) =>
    ask<LabResults>(`${stream(id)}/lab${query({ from, to })}`, { signal }),
  settings: () => ask<KeptSettings>("/me/settings"),
  keepSettings: (settings: Settings) => ask<void>("/me/settings", { ...asJson(settings), method: "PUT" }),
  handoverShifts: (count: number, signal?: AbortSignal) =>
    ask<HandoverShifts>(`/handover/shifts${query({ count })}`, { signal }),
  shiftRecord: (at: number | undefined, signal?: AbortSignal) =>
    ask<BoundRecord>(`/handover/record${query({ at })}`, { signal }),
  shiftRecordFile: (at: number, format: "html" | "csv" | "json") => `/api/v1/handover/record/${format}${query({ at })}`,
  /** `shift`: its beginning */
  writeToShift: (shift: number, write: Write) => ask<unknown>("/handover/entries", asJson({ shift, write })),
  signShift: (sign: { shift: number; side: SigningSide; seen: string | null; name: string; password: string }) =>
    ask<unknown>("/handover/signatures", asJson(sign)),
  said: (words: string, signal?: AbortSignal) => ask<Said>(`/handover/search${query({ words })}`, { signal }),
  signIn: (name: string, password: string) => ask<Plant["person"]>("/sign-in", asJson({ name, password })),
  /** is somebody signed in, or nobody needed? A link that was refused does not say why. */
  isWelcome: () =>
    ask<unknown>("/me").then(
      () => true,
      (error) => !(error instanceof ApiError && error.status === 401),
    ),
  signOut: () => ask<void>("/sign-out", { method: "POST" }),
};
