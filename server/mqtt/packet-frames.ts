/** One MQTT control packet on the wire: its type is the upper half of the first byte (MQTT 3.1.1 §2.2.1, 5.0 §2.1.2). */
export const puback = 4;

/**
 * Finds the borders of MQTT control packets in a stream of bytes, without reading what is in them: fixed header, one byte, then the remaining
 * length in one to four bytes of seven bits each, lowest first (MQTT 3.1.1 §2.2.3, the same in 5.0).
 */
export class PacketFrames {
  #type = 0;
  #length = 0;
  #shift = 0;
  #left = 0;
  #in: "type" | "length" | "body" = "type";

  /**
   * Calls `part` for every stretch of `chunk` that belongs to one packet, in order. `begins` and `ends`: the stretch holds the packet's first
   * and last byte. `header` is called once the length of a packet is known, before its body.
   */
  read(
    chunk: Uint8Array,
    on: {
      header?: (type: number, length: number) => void;
      part?: (type: number, from: number, to: number, ends: boolean) => void;
    },
  ): void {
    let from = 0;
    for (let i = 0; i < chunk.length; ) {
      switch (this.#in) {
        case "type":
          from = i;
          this.#type = chunk[i++] >> 4;
          this.#length = 0;
          this.#shift = 0;
          this.#in = "length";
          break;
        case "length": {
          const byte = chunk[i++];
          this.#length += (byte & 0x7f) * 2 ** this.#shift;
          this.#shift += 7;
          // A fourth byte with its top bit set is malformed; whoever reads the packet says so. Here it ends the length.
          if (byte >= 0x80 && this.#shift < 28) break;
          on.header?.(this.#type, this.#length);
          this.#left = this.#length;
          this.#in = "body";
          if (this.#left === 0) this.#end(on, from, i);
          break;
        }
        case "body": {
          const taken = Math.min(this.#left, chunk.length - i);
          this.#left -= taken;
          i += taken;
          if (this.#left === 0) this.#end(on, from, i);
          break;
        }
        default:
          this.#in satisfies never;
      }
    }
    if (this.#in !== "type" && from < chunk.length) on.part?.(this.#type, from, chunk.length, false);
  }

  #end(on: Parameters<PacketFrames["read"]>[1], from: number, to: number): void {
    on.part?.(this.#type, from, to, true);
    this.#in = "type";
  }
}
