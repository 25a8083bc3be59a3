import { wavelengths } from "./axis.ts";

/** One absorption band: a Gaussian. Invented for this plant, at places where such groups do absorb. */
export interface Band {
  centreNm: number;
  /** standard deviation of the Gaussian, nm */
  widthNm: number;
  /** absorbance at the centre for mass fraction 1 over 1 mm of path, at the reference temperature */
  height: number;
  /** where the centre goes when it gets warmer, nm per kelvin: hydrogen bonds loosen, so O–H goes to shorter wavelengths */
  shiftNmPerK?: number;
  /** relative growth of the height per kelvin */
  growthPerK?: number;
}

/** Sum of the bands over the analyzer's axis, `warmerK` above the reference temperature: absorbance per mm and mass fraction. */
export function bandSpectrum(bands: readonly Band[], warmerK = 0): Float64Array {
  const placed = bands.map(({ centreNm, widthNm, height, shiftNmPerK = 0, growthPerK = 0 }) => ({
    centre: centreNm + shiftNmPerK * warmerK,
    widthNm,
    height: height * (1 + growthPerK * warmerK),
  }));
  return wavelengths.map((nm) =>
    placed.reduce(
      (sum, { centre, widthNm, height }) => sum + height * Math.exp(-0.5 * ((nm - centre) / widthNm) ** 2),
      0,
    ),
  );
}

/** Change of `bandSpectrum` per kelvin at the reference temperature, by central difference over ± 1 K. */
export function bandSlope(bands: readonly Band[]): Float64Array {
  const warm = bandSpectrum(bands, 1);
  const cool = bandSpectrum(bands, -1);
  return warm.map((value, j) => (value - cool[j]!) / 2);
}

/**
 * A band that no calibration of this plant has seen, to be added to a spectrum.
 *
 * @param height absorbance at its centre
 * @returns 301 absorbances over the analyzer's axis
 */
export function unforeseenBand({ centreNm = 1880, widthNm = 22, height = 0.08 } = {}): Float64Array {
  return bandSpectrum([{ centreNm, widthNm, height }]);
}
