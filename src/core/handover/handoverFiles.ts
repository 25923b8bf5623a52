/** Everything that leaves the program, as files: one list for the screen and the command line. */
import { type CompiledRig, compileRig, GIMBAL_POWER, spinSheet } from '../physics';
import { createPlanWork, type Ledger, setUpPlan } from '../planning';
import type { Refusal, Rig } from '../rig';
import { computeGains, createEvaluationWork, evaluate, type GainOutcome } from '../trial';
import { type CalculationSheet, type Findings, makeSheet } from './calculationSheet';
import { canonicalRigText, hashRig } from './canonicalRig';
import { writeCHeader } from './cHeader';
import { listGains, listSchedule } from './controlNumbers';
import { writeGainsCsv } from './gainsCsv';
import { writeGlb } from './gltf';
import { describeHandover, type Imprint, writeHandoverJson } from './handoverJson';
import { hullMesh, wheelChordError, wheelMesh } from './partShapes';
import { listPlots } from './planPlots';
import { writePlotSvg } from './plotSvg';
import { modelRig } from './rigModel';
import { drawRig } from './rigPicture';
import { writeScheduleCsv } from './scheduleCsv';
import { sheetCautions } from './sheetCautions';
import { type SheetPicture, writeSheetHtml } from './sheetHtml';
import { writeSheetText } from './sheetText';
import { writeStl } from './stl';
import { encodeUtf8, fileStem, makeUnique } from './text';
import { writeUrdf } from './urdf';

export type HandoverGroup = 'firmware' | 'model' | 'pictures' | 'sheet' | 'rig';

export interface HandoverFile {
  readonly name: string;
  readonly group: HandoverGroup;
  /** What it is for, in one line. */
  readonly purpose: string;
  /** MIME type. */
  readonly type: string;
  readonly bytes: Uint8Array;
}

export interface Handover {
  readonly files: readonly HandoverFile[];
  readonly sheet: CalculationSheet;
  readonly pictures: readonly SheetPicture[];
  /** Why there is no schedule; undefined where there is one. */
  readonly noPlan: string | undefined;
}

export type HandoverOutcome =
  | { readonly kind: 'made'; readonly handover: Handover }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

const file = (
  name: string,
  group: HandoverGroup,
  purpose: string,
  type: string,
  content: string | Uint8Array,
): HandoverFile => ({
  name,
  group,
  purpose,
  type,
  bytes: typeof content === 'string' ? encodeUtf8(content) : content,
});

function firmwareFiles(compiled: CompiledRig, findings: Findings, imprint: Imprint): readonly HandoverFile[] {
  const { rig } = compiled;
  const { plan, motion } = findings.evaluation;
  const names = rig.array.gyros.map(({ name }) => name);
  const stem = fileStem(rig.name);
  const schedule = listSchedule(plan, names, motion.isCyclic);
  const gains = listGains(findings.gains);
  const files: HandoverFile[] = [];
  if (plan.kind === 'planned') {
    const text = writeScheduleCsv(plan.course, names);
    files.push(
      file(
        `${stem}-tilt-schedule.csv`,
        'firmware',
        'tilt and tilt rate of each gimbal over time, as a table',
        'text/csv',
        text,
      ),
    );
  }
  if (gains.kind === 'gains')
    files.push(
      file(
        `${stem}-gains.csv`,
        'firmware',
        'gains of the law, with their units, as a table',
        'text/csv',
        writeGainsCsv(gains),
      ),
    );
  if (schedule.kind === 'none' && gains.kind === 'none') return files;
  const document = describeHandover(compiled, schedule, gains, imprint);
  files.push(
    file(
      `${stem}-control.json`,
      'firmware',
      'schedule and gains in one document, unrounded, with a published schema',
      'application/json',
      writeHandoverJson(document),
    ),
    file(
      `${stem}-control.h`,
      'firmware',
      'schedule and gains as C99 arrays with a checksum',
      'text/x-c',
      writeCHeader(rig.name, hashRig(rig), schedule, gains, imprint),
    ),
  );
  return files;
}

function modelFiles(compiled: CompiledRig, imprint: Imprint): readonly HandoverFile[] {
  const { rig } = compiled;
  const stem = fileStem(rig.name);
  const files = [
    file(
      `${stem}.urdf`,
      'model',
      'robot description: links, masses, inertias, joints and limits',
      'application/xml',
      writeUrdf(compiled, imprint.program),
    ),
    file(
      `${stem}.glb`,
      'model',
      'the whole rig as a 3D model, in metres',
      'model/gltf-binary',
      writeGlb(modelRig(rig), imprint.program),
    ),
  ];
  if (rig.body.kind === 'hull') {
    const title = `${rig.name} hull section drawn out over its length, and fin`;
    files.push(
      file(
        `${stem}-section.stl`,
        'model',
        'the hull as its section drawn out, in millimetres',
        'model/stl',
        writeStl(hullMesh(rig.body), title),
      ),
    );
  }
  const wheels = new Map(rig.array.gyros.map(({ wheel }) => [JSON.stringify(wheel.parts), wheel]));
  const names = makeUnique([...wheels.values()].map(({ name }) => fileStem(name, 'wheel')));
  [...wheels.values()].forEach((wheel, i) => {
    const off = (1000 * wheelChordError(wheel)).toFixed(3);
    const title = `${wheel.name}; round surfaces within ${off} mm`;
    files.push(
      file(
        `${stem}-${names[i]}.stl`,
        'model',
        `the wheel’s parts to cut or print, in millimetres, round within ${off} mm`,
        'model/stl',
        writeStl(wheelMesh(wheel), title),
      ),
    );
  });
  return files;
}

/** W, what the ledger's battery line counts for the gimbals' drives; 0 where it has none. */
const gimbalPowerIn = ({ lines }: Ledger): number =>
  lines.find(({ name }) => name === 'battery')?.ask.inputs.find(({ label }) => label === GIMBAL_POWER)
    ?.value ?? 0;

/**
 * Finds out everything about a rig that is handed over: plan, ledger, gains, wheels.
 *
 * @param clock  s, from any fixed instant; the core has none
 *
 * About 0.3 s.
 */
export function findOut(
  rig: Rig,
  clock: () => number,
):
  | { readonly kind: 'found'; readonly compiled: CompiledRig; readonly findings: Findings }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] } {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') return outcome;
  const work = { ...createEvaluationWork(clock), plan: createPlanWork() };
  const evaluation = evaluate(rig, { isArrayOn: true, isPlanOn: true, isFeedbackOn: true }, work);
  if (evaluation.kind === 'refused') return evaluation;
  const set = setUpPlan(outcome.compiled);
  if (set.kind === 'refused') return set;
  const gains: GainOutcome = computeGains(set.setting);
  const spin = spinSheet(rig, gimbalPowerIn(evaluation.ledger));
  return {
    kind: 'found',
    compiled: outcome.compiled,
    findings: { rig, evaluation, gains, spin, cautions: sheetCautions(outcome.compiled, spin) },
  };
}

/**
 * Makes every file. What cannot be made (a schedule without a plan) is left out, and why is said.
 *
 * About 0.5 s and a few megabytes.
 */
export function makeHandover(rig: Rig, imprint: Imprint, clock: () => number): HandoverOutcome {
  const found = findOut(rig, clock);
  if (found.kind === 'refused') return found;
  const { compiled, findings } = found;
  const { plan } = findings.evaluation;
  const stem = fileStem(rig.name);
  const plots = listPlots(rig, plan, findings.spin.kind === 'sheet' ? findings.spin.sheet : undefined).map(
    ({ name, plot }) => ({ name, title: plot.title, svg: writePlotSvg(plot) }),
  );
  const portrait = drawRig(rig);
  const pictures: readonly SheetPicture[] = [
    { kind: 'svg', caption: `${rig.name} at rest, seen from the front left and above.`, svg: portrait },
    ...plots.map(({ svg }) => ({ kind: 'svg' as const, caption: '', svg })),
  ];
  const sheet = makeSheet(findings, imprint);
  const svgType = 'image/svg+xml';
  return {
    kind: 'made',
    handover: {
      sheet,
      pictures,
      noPlan: plan.kind === 'planned' ? undefined : plan.sentence,
      files: [
        ...firmwareFiles(compiled, findings, imprint),
        ...modelFiles(compiled, imprint),
        file(`${stem}-rig.svg`, 'pictures', 'the rig at rest, as a drawing', svgType, portrait),
        ...plots.map(({ name, title, svg }) =>
          file(`${stem}-${name}.svg`, 'pictures', title[0]!.toLowerCase() + title.slice(1), svgType, svg),
        ),
        file(
          `${stem}-calculation-sheet.html`,
          'sheet',
          'every formula, input, result, limit and source, to read and print',
          'text/html',
          writeSheetHtml(sheet, pictures),
        ),
        file(
          `${stem}-calculation-sheet.txt`,
          'sheet',
          'the same as plain text',
          'text/plain',
          writeSheetText(sheet),
        ),
        file(
          `${stem}.rig.json`,
          'rig',
          'the rig itself: the file whose hash the sheet names',
          'application/json',
          canonicalRigText(rig),
        ),
      ],
    },
  };
}
