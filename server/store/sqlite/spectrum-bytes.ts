/**
 * A spectrum as bytes, little-endian: 4 bytes a value where float32 holds every value exactly (what analyzers send), else 8. Exact both
 * ways, so that a recorded spectrum scores as the live one did.
 */
export function spectrumBytes(values: Float64Array): { width: 4 | 8; data: Buffer } {
  const narrow = Float32Array.from(values);
  const exact = isSame(values, narrow);
  const array = exact ? narrow : values;
  return { width: exact ? 4 : 8, data: Buffer.from(array.buffer, array.byteOffset, array.byteLength) };
}

/** A plain loop: it runs for every value that is ever recorded. NaN and −0 are the same in both widths. */
function isSame(values: Float64Array, narrow: Float32Array): boolean {
  for (let j = 0; j < values.length; j++) {
    if (narrow[j] !== values[j] && !Number.isNaN(values[j])) return false;
  }
  return true;
}

export function spectrumValues(data: Buffer, width: number): Float64Array {
  // Alignment is not promised: copy before viewing.
  const bytes = Uint8Array.from(data);
  return width === 4 ? Float64Array.from(new Float32Array(bytes.buffer)) : new Float64Array(bytes.buffer);
}
