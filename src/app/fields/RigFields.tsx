/** Fields drawn from the schema by path, so that no label, unit or range is written twice. */
import type { Rig } from '../../core/rig';
import { useDocument } from '../state/document';
import { useSession } from '../state/session';
import { Choice } from './Choice';
import { kindDefault } from './kindDefaults';
import { countLikeGyros, writeToLikeGyros } from './likeGyros';
import { NumberField } from './NumberField';
import { type RigPath, readAt, shapeAt, writeAt } from './rigPath';
import { TextField } from './TextField';
import { keyWords, optionWords } from './words';

interface AtPath {
  readonly path: RigPath;
  /** In place of the schema's label. */
  readonly label?: string | undefined;
}

const isWithinGyro = (path: RigPath): boolean => path[0] === 'array' && path.length > 3;

/** Writes to one place, or through it to every gyro that is like this one there. */
function write(rig: Rig, path: RigPath, value: unknown, reachesLikeGyros: boolean): Rig {
  return reachesLikeGyros && isWithinGyro(path)
    ? writeToLikeGyros(rig, path[2] as number, path.slice(3), value)
    : writeAt(rig, path, value);
}

function useWriter(path: RigPath, label: string) {
  const edit = useDocument((document) => document.edit);
  const reachesLikeGyros = !useSession((session) => session.isEachOnItsOwn);
  return (value: unknown): void => edit(label, (rig) => write(rig, path, value, reachesLikeGyros));
}

/** A number of the rig; nothing when there is none at the path. */
export function RigNumber({ path, label }: AtPath) {
  const value = useDocument((document) => readAt(document.rig, path));
  const shape = useDocument((document) => document.rig) && shapeAt(useDocument.getState().rig, path);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const name = label ?? (shape.kind === 'quantity' ? shape.info.label : '');
  const writeValue = useWriter(path, name);
  if (shape.kind !== 'quantity' || typeof value !== 'number') return null;
  return (
    <NumberField
      info={shape.info}
      value={value}
      label={label}
      isReadOnly={isReadOnly}
      onChange={writeValue}
      onBegin={() => useDocument.getState().begin(name)}
      onCommit={() => useDocument.getState().commit()}
      onCancel={() => useDocument.getState().cancel()}
    />
  );
}

/** One of the words a rig may hold at a path. */
function RigChoice({ path, label }: AtPath) {
  const rig = useDocument((document) => document.rig);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const name = label ?? keyWords(String(path.at(-1)));
  const writeValue = useWriter(path, name);
  const shape = shapeAt(rig, path);
  if (shape.kind !== 'choice') return null;
  return (
    <Choice
      label={name}
      options={shape.options.map((value) => ({ value, label: optionWords(value) }))}
      value={readAt(rig, path) as string | number}
      isReadOnly={isReadOnly}
      onChange={writeValue}
    />
  );
}

/** Which branch of a union the rig takes at a path; another branch starts with the values of `kindDefault`. */
export function RigKind({ path, label, options }: AtPath & { readonly options?: readonly string[] }) {
  const rig = useDocument((document) => document.rig);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const name = label ?? keyWords(String(path.at(-1)));
  const writeValue = useWriter(path, name);
  const shape = shapeAt(rig, path);
  if (shape.kind !== 'variant') return null;
  const offered = shape.options.filter(
    (kind) => (options?.includes(kind) ?? true) && kindDefault(rig, path, kind) !== undefined,
  );
  return (
    <Choice
      label={name}
      options={offered.map((value) => ({ value, label: optionWords(value) }))}
      value={(readAt(rig, path) as { kind: string }).kind}
      isReadOnly={isReadOnly}
      onChange={(kind) => writeValue(kindDefault(rig, path, kind))}
    />
  );
}

function RigText({ path, label }: AtPath) {
  const value = useDocument((document) => readAt(document.rig, path));
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const name = label ?? keyWords(String(path.at(-1)));
  const writeValue = useWriter(path, name);
  return (
    <TextField
      label={name}
      value={String(value)}
      longest={80}
      isReadOnly={isReadOnly}
      onChange={writeValue}
    />
  );
}

/** Everything the schema knows at a path and below, lists left out. */
export function RigFields({ path, label, hidesKind }: AtPath & { readonly hidesKind?: boolean }) {
  const rig = useDocument((document) => document.rig);
  const shape = shapeAt(rig, path);
  switch (shape.kind) {
    case 'quantity':
      return <RigNumber path={path} label={label} />;
    case 'choice':
      return <RigChoice path={path} label={label} />;
    case 'text':
      return <RigText path={path} label={label} />;
    case 'tuple':
      return Array.from({ length: shape.length }, (_, index) => (
        // The places of a tuple are fixed, so their numbers are their names.
        // biome-ignore lint/suspicious/noArrayIndexKey: see above
        <RigFields key={index} path={[...path, index]} />
      ));
    case 'variant':
    case 'group':
      return (
        <>
          {shape.kind === 'variant' && !hidesKind && <RigKind path={path} label={label} />}
          {shape.keys.map((key) => (
            <RigFields key={key} path={[...path, key]} />
          ))}
        </>
      );
    case 'other':
      return null;
  }
}

/** How many gyros a change at a place of this one would reach, in words; nothing when it is the only one. */
export function useReachWords(gyro: number): string | undefined {
  const rig = useDocument((document) => document.rig);
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  const count = rig.array.gyros.length;
  if (count < 2) return undefined;
  if (isEachOnItsOwn) return `Changes reach ${rig.array.gyros[gyro]?.name ?? 'this gyro'} only`;
  const alike = countLikeGyros(rig, gyro, ['wheel']);
  return alike === count ? `Changes reach all ${count} alike` : `Changes reach those alike of ${count}`;
}
