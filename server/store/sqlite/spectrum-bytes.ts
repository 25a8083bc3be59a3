/**
 * A spectrum as bytes, little-endian: 4 bytes a value where float32 holds every value exactly (what analyzers send), else 8. Exact both
 * ways, so that a recorded spectrum scores as the live one did.
 */
export function spectrumBytes(values: Float64Array): { width: 4 | 8; data: Buffer } {
  const narrow = Float32Array.from(values);
  // Object.is: NaN must survive, and −0 must not become 0.
  const exact = values.every((value, i) => Object.is(narrow[i], value));
  const array = exact ? narrow : values;
  return { width: exact ? 4 : 8, data: Buffer.from(array.buffer, array.byteOffset, array.byteLength) };
}

export function spectrumValues(data: Buffer, width: number): Float64Array {
  // Alignment is not promised: copy before viewing.
  const bytes = Uint8Array.from(data);
  return width === 4 ? Float64Array.from(new Float32Array(bytes.buffer)) : new Float64Array(bytes.buffer);
}
