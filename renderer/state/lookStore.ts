import {
  type ParameterKey,
  type Parameters,
  parameterTable,
  type Stratum,
} from '../../core/parameters/table.ts';
import { createStore } from './store.ts';
import {
  type ChangeGroup,
  closeGroup,
  recordChange,
  redo,
  startHistory,
  type UndoHistory,
  undo,
} from './undoHistory.ts';

/** What undo and redo go through: everything that decides how the photo is painted. */
export interface Look {
  presetId: string;
  /** The state that the parameters are changes of. */
  stateId: string;
  /** That state's own values: the marks on the controls, and what a reset returns to. */
  presetParameters: Parameters;
  parameters: Parameters;
  printLongEdgeMm: number;
  /** Strengths of lifted strata, so that laying one down again finds its strength. */
  lifted: Partial<Record<Stratum, number>>;
}

export const lookStore = createStore<UndoHistory<Look> | null>(null);

export function currentLook(): Look | null {
  return lookStore.get()?.present ?? null;
}

export function startLook(look: Look): void {
  lookStore.set(startHistory(look));
}

export function endLook(): void {
  lookStore.set(null);
}

export function changeLook(change: Partial<Look>, label: string, group: ChangeGroup | null = null): void {
  lookStore.update(
    (history) =>
      history && recordChange(history, { ...history.present, ...change }, label, group, performance.now()),
  );
}

/** Sets one parameter; the group makes a drag or a run of key presses one step. */
export function setParameter<K extends ParameterKey>(
  key: K,
  value: Parameters[K],
  group: ChangeGroup | null = { name: key, held: false },
): void {
  const look = currentLook();
  if (!look || look.parameters[key] === value) return;
  const parameter = parameterTable[key];
  const lifted = { ...look.lifted };
  if (key === strengthKey(parameter.stratum)) delete lifted[parameter.stratum];
  changeLook(
    { parameters: { ...look.parameters, [key]: value }, lifted },
    `${stratumName(parameter.stratum)}, ${parameter.label.toLowerCase()}`,
    group,
  );
}

export function resetParameter(key: ParameterKey): void {
  const look = currentLook();
  if (look) setParameter(key, look.presetParameters[key], null);
}

/** Strata from the ground up, as far as the parameter table knows them. */
export const strataBottomUp: readonly Stratum[] = (['ground', 'body', 'line', 'relief'] as const).filter(
  (stratum) => Object.values(parameterTable).some((parameter) => parameter.stratum === stratum),
);

/** The parameter that a band's thickness shows. The ground is as strong as the paper is thin. */
export function strengthKey(stratum: Stratum): ParameterKey {
  return (stratum === 'ground' ? 'ground.paper' : `${stratum}.strength`) as ParameterKey;
}

export function strengthOf(parameters: Parameters, stratum: Stratum): number {
  const value = parameters[strengthKey(stratum)] as number;
  return stratum === 'ground' ? 1 - value : value;
}

export function setStrength(stratum: Stratum, strength01: number, group?: ChangeGroup | null): void {
  const clean = Math.round(Math.min(1, Math.max(0, strength01)) * 100) / 100;
  const value = stratum === 'ground' ? Math.round((1 - clean) * 100) / 100 : clean;
  setParameter(strengthKey(stratum), value as never, group);
}

/** Lifts a stratum off the picture, or lays it down again at the strength it had. */
export function toggleLifted(stratum: Stratum): void {
  const look = currentLook();
  if (!look) return;
  const kept = look.lifted[stratum];
  const lifted = { ...look.lifted };
  const strength01 = kept ?? 0;
  if (kept === undefined) lifted[stratum] = strengthOf(look.parameters, stratum);
  else delete lifted[stratum];
  const value = stratum === 'ground' ? 1 - strength01 : strength01;
  changeLook(
    { parameters: { ...look.parameters, [strengthKey(stratum)]: value }, lifted },
    `${stratumName(stratum)} ${kept === undefined ? 'lifted' : 'laid down'}`,
  );
}

export function stratumName(stratum: Stratum): string {
  return stratum[0].toUpperCase() + stratum.slice(1);
}

export function endDrag(): void {
  lookStore.update((history) => history && closeGroup(history));
}

export function undoLook(): void {
  lookStore.update((history) => history && undo(history));
}

export function redoLook(): void {
  lookStore.update((history) => history && redo(history));
}
