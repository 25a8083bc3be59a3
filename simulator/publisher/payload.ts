import { Encoder } from "cbor-x";
import type { LabMessage } from "../../core/messages/index.ts";
import { analyzerAxis, type PlantStreamId } from "../plant/index.ts";
import type { GrabSample, SimulatedReading } from "../scenario/index.ts";

/** Plain maps, and a Float32Array as the RFC 8746 typed array that it is (tag 85). */
const cbor = new Encoder({ useRecords: false, variableMapSize: true, tagUint8Array: false });

/** As analyzers of several makers would: one line speaks JSON, the others CBOR. */
const jsonStreams: ReadonlySet<PlantStreamId> = new Set(["bq-410"]);

/** The payload of `…/reading`: the contract's reading, with the axis, so that the receiver can check it. */
export function readingPayload({ stream, time, sequence, values, context }: SimulatedReading): Buffer {
  if (!jsonStreams.has(stream)) return cbor.encode({ time, sequence, values, axis: analyzerAxis, context });
  const reading = {
    time: new Date(time).toISOString(),
    sequence,
    values: Array.from(values),
    axis: analyzerAxis,
    context,
  };
  return Buffer.from(JSON.stringify(reading));
}

/** The payload of `…/lab`: laboratories speak JSON. */
export function labPayload(result: LabMessage): string {
  return JSON.stringify(result);
}

/** One laboratory result of a history in CBOR, with the moment at which it was there. */
export function labHistoryItem({ stream, reported }: GrabSample, lab: LabMessage): Buffer {
  return cbor.encode({ stream, received: reported, lab });
}

/** One item of a history in CBOR: the stream stands in it, as there is no topic; the axis is `analyzerAxis`. */
export function historyItem({ stream, time, sequence, values, context }: SimulatedReading): Buffer {
  return cbor.encode({ stream, time, sequence, values, context });
}
