import { HERTZ_PER_KILOHERTZ, METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import { judgeAmplitude } from '#src/physics/fatigue.ts';
import { checkMachine as judgeMachine, type MachineCheck, type MachineFinding } from '#src/physics/machine/check.ts';
import { lengthShare, longestMassLikeTool, TOOL_LENGTH_SHARE } from '#src/physics/machine/end-mass.ts';
import { USUAL_FREQUENCY } from '#src/physics/machine/practice.ts';
import type { ToolMaterial } from '#src/physics/records.ts';
import { toolMaterialOf } from '../library.ts';
import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';
import type { JobFrame } from './draft.ts';
import type { JobHorn } from './drive.ts';
import { amplitudeField, type PassDraft } from './pass-draft.ts';
import { mm, percent, problem, um } from './words.ts';

/** Library material whose strain limit stands for the horn's: horns are of titanium. Common practice. */
const HORN = 'ti_6al_4v';

/** Amplitude against the fatigue of the tool, and of a titanium horn where the job names none. */
function amplitudeBearable(
  { library }: JobFrame,
  pass: PassDraft,
  amplitude: number,
  material: ToolMaterial,
): Problem[] {
  const { frequency, horn: own } = pass.vibration;
  const horn = own ? undefined : library.tools.find((record) => record.id === HORN);
  const parts = [
    { name: 'tool', verdict: judgeAmplitude(material, amplitude, frequency) },
    ...(horn ? [{ name: 'titanium horn', verdict: judgeAmplitude(toolMaterialOf(horn), amplitude, frequency) }] : []),
  ].sort((a, b) => b.verdict.share - a.verdict.share);
  const { name, verdict } = parts[0] as (typeof parts)[number];
  if (verdict.answer === 'fine') return [];
  const refused = verdict.answer === 'refuse';
  const other = name === 'tool' ? ", or change the tool's material" : '';
  const message = refused
    ? `${um(amplitude)} would crack the ${name}: that is ${percent(verdict.share)} of what it bears smooth. Enter less${other}.`
    : `${um(amplitude)} is ${percent(verdict.share)} of what the ${name} bears smooth; fillets, brazing and wet corrosion halve that.`;
  const { path, value } = amplitudeField(pass);
  const allowed = `up to ${um(verdict.limit / (refused ? 1 : 2))}`;
  return [problem(refused ? 'refuse' : 'warn', pass.view.at(path), value, allowed, message)];
}

function toolShort(pass: PassDraft, material: ToolMaterial): Problem[] {
  const { lengthMm } = pass.view.job.tool ?? {};
  if (lengthMm === undefined || pass.vibration.horn?.tuned) return [];
  const { frequency } = pass.vibration;
  const length = lengthMm * METRES_PER_MILLIMETRE;
  const share = lengthShare({ material, area: 1, length }, frequency);
  if (share <= TOOL_LENGTH_SHARE) return [];
  const longest = longestMassLikeTool(material, frequency);
  const message = `The tool is ${percent(share)} of the wavelength long: it vibrates as a bar and detunes the horn. Shorten it, or tune the horn with it and say machine.horn.tuned: true.`;
  return [problem('warn', pass.view.at('tool.lengthMm'), lengthMm, `up to ${mm(longest)}`, message)];
}

function frequencyUsual({ view, vibration }: PassDraft): Problem[] {
  const { min, max } = USUAL_FREQUENCY;
  if (vibration.frequency >= min && vibration.frequency <= max) return [];
  const value = view.job.machine?.frequencyKHz;
  const allowed = `${min / HERTZ_PER_KILOHERTZ} to ${max / HERTZ_PER_KILOHERTZ} kHz`;
  const message = 'Machines of this kind work at 20 to 40 kHz. Make sure of the value and its unit.';
  return [problem('warn', view.at('machine.frequencyKHz'), value, allowed, message)];
}

/** What the physics found about the horn, in words; what is told of the tool and the frequency without a horn is left out. */
function hornWords(check: MachineCheck, { gain }: JobHorn, { code, value, limit }: MachineFinding): string | undefined {
  const most = um(check.largestAmplitude);
  switch (code) {
    case 'horn-fatigue':
      return value > 1
        ? `The horn would crack: it is worked to ${percent(value)} of what it bears smooth, which is ${most} at the tool. Take less amplitude, or another horn.`
        : `The horn is worked to ${percent(value)} of what it bears smooth, ${most} at the tool; fillets and threads halve that.`;
    case 'horn-fatigue-free':
      return `Lifted off the work the amplitude rises to ${um(check.freeAmplitude)}, ${percent(value)} of what the horn bears. Do not let it run free.`;
    case 'tool-detunes':
      return `The tool's mass lowers the resonance by ${percent(value)} and moves the gain from ${formatNumber(gain, 3)} to ${formatNumber(check.detuning.gain, 3)}; generators follow about ${percent(limit)}. Shorten the tool, or tune the horn with it and say tuned: true.`;
    case 'transducer-amplitude':
      return `This takes ${um(value)} at the transducer, and about ${um(limit)} is the most one reaches. Take a horn of more gain, or less amplitude.`;
    default:
      return undefined;
  }
}

function hornBears(pass: PassDraft, amplitude: number, material: ToolMaterial, horn: JobHorn): Problem[] {
  const lengthMm = pass.view.job.tool?.lengthMm ?? 0;
  const tool = { material, area: pass.faceArea ?? 0, length: lengthMm * METRES_PER_MILLIMETRE };
  const check = judgeMachine({
    horn: horn.horn,
    tool: { ...tool, area: Math.max(0, tool.area) },
    amplitude,
    frequency: pass.vibration.frequency,
    loadingFactor: horn.loadingFactor,
    tunedWithTool: horn.tuned,
  });
  const field = amplitudeField(pass);
  return check.findings.flatMap((finding) => {
    const message = hornWords(check, horn, finding);
    if (message === undefined) return [];
    const ofTool = finding.code === 'tool-detunes';
    const path = pass.view.at(ofTool ? 'tool.lengthMm' : field.path);
    const allowed = ofTool
      ? `a shift of at most ${percent(finding.limit)}`
      : finding.code === 'transducer-amplitude'
        ? `up to ${um(finding.limit)} at the transducer`
        : `up to ${um(check.largestAmplitude * (finding.answer === 'refuse' ? 1 : 0.5))} at the tool`;
    return [problem(finding.answer, path, ofTool ? pass.view.job.tool?.lengthMm : field.value, allowed, message)];
  });
}

/** The machine of a pass: fatigue of tool and horn, detuning, the transducer's reach, and the frequency. */
export function checkMachine(frame: JobFrame, pass: PassDraft): Problem[] {
  const { toolMaterial: material, vibration } = pass;
  const { amplitude, horn } = vibration;
  const rest = frequencyUsual(pass);
  if (!material || amplitude === undefined) return rest;
  return [
    ...amplitudeBearable(frame, pass, amplitude, material),
    ...(horn ? hornBears(pass, amplitude, material, horn) : []),
    ...toolShort(pass, material),
    ...rest,
  ];
}
