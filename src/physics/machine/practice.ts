/** Figures of the machine that are practice and not law. Amplitudes zero-to-peak (m), frequencies in Hz. */

/** Usual frequencies. Common practice, no source. */
export const USUAL_FREQUENCY = { min: 20e3, max: 40e3 } as const;

/**
 * Largest amplitude a transducer reaches by itself, about; beyond it a horn is needed. Common practice, no source, and
 * it is not said whether stroke or half of it: taken as zero-to-peak, the lenient reading.
 */
export const LARGEST_TRANSDUCER_AMPLITUDE = 25e-6;

/** Amplitude under static load over the free one. Assumed. */
export const LOADING_FACTOR = { nominal: 0.9, min: 0.8, max: 0.95 } as const;

/** Usual amplitudes at the tool at 20 to 25 kHz: strokes of 15 to 50 um peak to peak. From memory. */
export const USUAL_AMPLITUDE = { min: 7.5e-6, max: 25e-6 } as const;

/** Acoustic output over electrical input: El-Hofy, Fundamentals of Machining Processes. */
export const TRANSDUCER_EFFICIENCY = {
  magnetostrictive: { min: 0.55, max: 0.55 },
  piezoelectric: { min: 0.9, max: 0.95 },
} as const;
