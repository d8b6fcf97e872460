import { judgeAmplitude, WARNING_SHARE } from '../fatigue.ts';
import { transducerAmplitudeFor } from './amplitude.ts';
import {
  DETUNING_SHARE,
  type Detuning,
  type EndTool,
  jointStress,
  lengthShare,
  TOOL_LENGTH_SHARE,
  toolDetuning,
} from './end-mass.ts';
import { diameterRatio, type Horn, hornCharacter, judgeHorn, resonantLength } from './horn.ts';
import { LARGEST_TRANSDUCER_AMPLITUDE, LOADING_FACTOR, USUAL_FREQUENCY } from './practice.ts';

/** Everything between generator and slurry. */
export interface Machine {
  readonly horn: Horn;
  readonly tool: EndTool;
  /** Wanted at the tool face under load, zero-to-peak (m). */
  readonly amplitude: number;
  readonly frequency: number;
  /** Loaded over free amplitude (1); 0.9 unless given. */
  readonly loadingFactor?: number;
  /** The horn was shortened for this tool, so neither its mass nor its length detunes. */
  readonly tunedWithTool?: boolean;
}

/** What can be said against a machine. */
export type MachineFindingCode =
  /** Amplitude over the horn's smooth limit (1). */
  | 'horn-fatigue'
  /** The same when the load is lifted and the amplitude rises. */
  | 'horn-fatigue-free'
  /** Amplitude over the limit of a half-wave bar of the tool's material (1). */
  | 'tool-fatigue'
  /** Tool length over wavelength (1). */
  | 'tool-long'
  /** Share of the frequency by which the tool's mass lowers the resonance (1). */
  | 'tool-detunes'
  /** Transducer amplitude needed, zero-to-peak (m). */
  | 'transducer-amplitude'
  /** Frequency (Hz). */
  | 'frequency-unusual';

export interface MachineFinding {
  readonly code: MachineFindingCode;
  readonly answer: 'warn' | 'refuse';
  /** The number that was judged, in the unit of its code. */
  readonly value: number;
  /** What it was judged against; the nearer end of a range. */
  readonly limit: number;
}

/** The machine's figures and what speaks against it. */
export interface MachineCheck {
  readonly gain: number;
  readonly transducerAmplitude: number;
  /** Amplitude when the load is lifted (m, zero-to-peak). */
  readonly freeAmplitude: number;
  readonly hornLength: number;
  readonly largestAmplitude: number;
  readonly detuning: Detuning;
  /** Stress of the tool's own inertia at its joint (Pa). */
  readonly jointStress: number;
  readonly findings: readonly MachineFinding[];
}

/**
 * Works out a horn and a tool and judges them: refuse above a smooth fatigue limit under load, warn above half of it,
 * above it when lifted, for a tool longer than a twentieth of the wavelength or that shifts the resonance by more than
 * 2 %, for a transducer beyond 25 um and a frequency outside 20 to 40 kHz. The gain is that of the horn alone.
 */
export function checkMachine(machine: Machine): MachineCheck {
  const { horn, tool, amplitude, frequency } = machine;
  const loadingFactor = machine.loadingFactor ?? LOADING_FACTOR.nominal;
  const { gain } = hornCharacter(horn.shape, diameterRatio(horn));
  const transducerAmplitude = transducerAmplitudeFor(amplitude, { gain, loadingFactor });
  const freeAmplitude = amplitude / loadingFactor;
  const detuning = toolDetuning(horn, tool, frequency);
  return {
    gain,
    transducerAmplitude,
    freeAmplitude,
    hornLength: resonantLength(horn, frequency),
    largestAmplitude: judgeHorn(horn, amplitude, frequency).limit,
    detuning,
    jointStress: jointStress(tool, amplitude, frequency),
    findings: [
      ...fatigueFindings(machine, freeAmplitude),
      ...(machine.tunedWithTool ? [] : tuningFindings(machine, detuning)),
      ...practiceFindings(transducerAmplitude, frequency),
    ],
  };
}

function fatigueFindings({ horn, tool, amplitude, frequency }: Machine, freeAmplitude: number): MachineFinding[] {
  const findings: MachineFinding[] = [];
  const judge = (code: MachineFindingCode, share: number) => {
    if (share > WARNING_SHARE) {
      findings.push({
        code,
        answer: share > 1 ? 'refuse' : 'warn',
        value: share,
        limit: share > 1 ? 1 : WARNING_SHARE,
      });
    }
  };
  const hornShare = judgeHorn(horn, amplitude, frequency).share;
  const freeShare = judgeHorn(horn, freeAmplitude, frequency).share;
  judge('horn-fatigue', hornShare);
  if (hornShare <= 1 && freeShare > 1) {
    findings.push({ code: 'horn-fatigue-free', answer: 'warn', value: freeShare, limit: 1 });
  }
  judge('tool-fatigue', judgeAmplitude(tool.material, amplitude, frequency).share);
  return findings;
}

function tuningFindings({ tool, frequency }: Machine, detuning: Detuning): MachineFinding[] {
  const findings: MachineFinding[] = [];
  const long = lengthShare(tool, frequency);
  if (long > TOOL_LENGTH_SHARE) {
    findings.push({ code: 'tool-long', answer: 'warn', value: long, limit: TOOL_LENGTH_SHARE });
  }
  const shift = 1 - detuning.frequencyRatio;
  if (shift > DETUNING_SHARE) {
    findings.push({ code: 'tool-detunes', answer: 'warn', value: shift, limit: DETUNING_SHARE });
  }
  return findings;
}

function practiceFindings(transducerAmplitude: number, frequency: number): MachineFinding[] {
  const findings: MachineFinding[] = [];
  if (transducerAmplitude > LARGEST_TRANSDUCER_AMPLITUDE) {
    findings.push({
      code: 'transducer-amplitude',
      answer: 'warn',
      value: transducerAmplitude,
      limit: LARGEST_TRANSDUCER_AMPLITUDE,
    });
  }
  const { min, max } = USUAL_FREQUENCY;
  if (frequency < min || frequency > max) {
    findings.push({ code: 'frequency-unusual', answer: 'warn', value: frequency, limit: frequency < min ? min : max });
  }
  return findings;
}
