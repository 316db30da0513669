import type { Rect } from '../../core/pixels/photo.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import type { CompositorClient } from '../compositing/compositorClient.ts';
import type { PieceSlot, SceneSide } from '../compositing/messages.ts';
import { fitMargin } from '../easel/stageMeasures.ts';
import { baseLevel, contains, levelForScale, visibleRegion } from '../geometry/levels.ts';
import type { PlacedView, Size } from '../geometry/viewTransform.ts';
import { fitScale } from '../geometry/viewTransform.ts';
import { isUnwanted, troubleOf } from '../host/host.ts';
import type { Look } from '../state/lookStore.ts';
import { idlePaint, type PaintState, paintStore } from '../state/paintStore.ts';
import { type ReceivedPiece, requestPiece } from './requestPiece.ts';
import { strataKey } from './strataKey.ts';

/** A hand that rests this long has finished a change: the sharp picture is asked for. */
const sharpAfterMs = 110;
/** A view that rests this long gets its pixels at full resolution. */
const detailAfterMs = 140;
/** Pixels of the level kept around the visible region, so that small pans need nothing new. */
const detailMarginPx = 48;

/** What the director needs to know of the stage. */
export interface StageView {
  view: PlacedView;
  stage: Size;
  devicePixelRatio: number;
}

interface HeldPiece {
  key: string;
  level: number;
  region: Rect;
  source: 'quick' | 'full';
}

/**
 * Decides what to ask the host for, and when. A change of the strata brings a rough picture at once, one
 * request at a time and always for the latest values, then, once the hand rests, the sharp one; whatever a newer
 * change makes stale is aborted. Zooming in brings the visible region at the level that the scale asks for.
 */
export class PaintDirector {
  private photo: OpenedPhoto | null = null;
  private look: Look | null = null;
  private stageView: StageView | null = null;
  private held: Partial<Record<PieceSlot, HeldPiece>> = {};
  private wantedKey = '';
  private wantedBase = -1;
  private readonly work: Partial<Record<PieceSlot, AbortController>> = {};
  private roughAgain = false;
  private sharpTimer: ReturnType<typeof setTimeout> | undefined;
  private detailTimer: ReturnType<typeof setTimeout> | undefined;
  shown: readonly PieceSlot[] = [];
  /** Called when other pieces are to be drawn. */
  onShown: () => void = () => {};
  /** Called each time the picture is sharp and nothing else waits. */
  onSettled: () => void = () => {};

  /** @param side whose picture it sees to; only the easel's own is reported on the screen */
  constructor(
    private readonly compositor: CompositorClient,
    private readonly side: SceneSide = 'easel',
  ) {}

  setPhoto(photo: OpenedPhoto | null): void {
    const isSame = photo?.photoId === this.photo?.photoId;
    this.photo = photo;
    if (isSame) {
      this.considerBase();
      return;
    }
    this.stopAll();
    for (const slot of Object.keys(this.held) as PieceSlot[]) this.compositor.dropPiece(this.side, slot);
    this.held = {};
    this.wantedKey = '';
    this.wantedBase = -1;
    this.setShown([]);
    this.report(idlePaint);
    this.considerLook();
  }

  setLook(look: Look | null): void {
    this.look = look;
    this.considerLook();
  }

  setStageView(stageView: StageView): void {
    this.stageView = stageView;
    if (this.wantedKey === '') this.considerLook();
    else {
      this.considerBase();
      this.considerDetail(detailAfterMs);
    }
  }

  /** Stops what is under way; the picture stays as it is until the next change. */
  stop(): void {
    this.stopAll();
    this.report({ busy: 'no', stopped: true });
  }

  /** Takes up work that was stopped or went wrong. */
  goOn(): void {
    this.report({ stopped: false, trouble: null });
    this.startRough();
    this.startSharpSoon(0);
  }

  private considerLook(): void {
    const { photo, look } = this;
    if (!photo || !look || !this.isStageReady()) return;
    const key = strataKey(look.parameters, look.printLongEdgeMm);
    if (key === this.wantedKey) return;
    this.wantedKey = key;
    this.wantedBase = this.chooseBase(photo);
    this.work.base?.abort();
    this.work.detail?.abort();
    this.report({ stopped: false, trouble: null });
    this.startRough();
    this.startSharpSoon(this.held.rough ? sharpAfterMs : 0);
  }

  private isStageReady(): boolean {
    return this.stageView !== null && this.stageView.stage.widthPx > 0;
  }

  private chooseBase(photo: OpenedPhoto): number {
    const { stage, devicePixelRatio } = this.stageView!;
    const wanted = baseLevel(photo.levels, fitScale(photo, stage, fitMargin(devicePixelRatio)));
    return photo.stage === 'quick' ? Math.max(wanted, photo.readyFromLevel) : wanted;
  }

  /** A larger stage, or a photo decoded to its end, may ask for a finer base. */
  private considerBase(): void {
    const { photo, held } = this;
    if (!photo || !this.look || !this.isStageReady()) return;
    const level = this.chooseBase(photo);
    const isQuick = held.base?.source === 'quick' && photo.stage === 'full';
    if (level >= this.wantedBase && !isQuick) return;
    this.wantedBase = level;
    this.startSharpSoon(isQuick ? 0 : sharpAfterMs);
  }

  private startRough(): void {
    if (this.work.rough) {
      this.roughAgain = true;
      return;
    }
    this.roughAgain = false;
    void this.run('rough', this.wantedBase).then(() => {
      if (this.roughAgain) this.startRough();
      else this.settle();
    });
  }

  private startSharpSoon(afterMs: number): void {
    clearTimeout(this.sharpTimer);
    this.report({ busy: 'sharp' });
    this.sharpTimer = setTimeout(() => void this.startSharp(), afterMs);
  }

  private async startSharp(): Promise<void> {
    if (this.needsDetail()) await this.startDetail();
    await this.run('base', this.wantedBase);
    // The photo may have been decoded to its end while its quick picture was being painted.
    if (!this.work.base) this.considerBase();
    this.considerDetail(0);
  }

  private considerDetail(afterMs: number): void {
    clearTimeout(this.detailTimer);
    const isWanted = this.needsDetail();
    this.showHeld();
    if (!isWanted) {
      this.settle();
      return;
    }
    this.detailTimer = setTimeout(() => void this.startDetail(), afterMs);
  }

  /** The region that the view asks for beyond the base, or null where the base does. */
  private wantedDetail(): { level: number; visible: Rect; asked: Rect } | null {
    const { photo, stageView } = this;
    if (!photo || !stageView || this.wantedBase < 0) return null;
    const { view, stage } = stageView;
    let level = levelForScale(view.scale, photo.levels.length);
    if (photo.stage === 'quick') level = Math.max(level, photo.readyFromLevel);
    if (level >= this.wantedBase) return null;
    const visible = visibleRegion(view, stage, photo.levels, level, 0);
    const asked = visibleRegion(view, stage, photo.levels, level, detailMarginPx);
    return visible && asked ? { level, visible, asked } : null;
  }

  private needsDetail(): boolean {
    const wanted = this.wantedDetail();
    if (!wanted) return false;
    const held = this.held.detail;
    return !(
      held &&
      held.key === this.wantedKey &&
      held.level === wanted.level &&
      (held.source === 'full' || this.photo?.stage === 'quick') &&
      contains(held.region, wanted.visible)
    );
  }

  private async startDetail(): Promise<void> {
    const wanted = this.wantedDetail();
    if (wanted) await this.run('detail', wanted.level, wanted.asked);
    this.settle();
  }

  private async run(slot: PieceSlot, level: number, region?: Rect): Promise<void> {
    const { photo, look } = this;
    if (!photo || !look) return;
    this.work[slot]?.abort();
    const abort = new AbortController();
    this.work[slot] = abort;
    const key = this.wantedKey;
    this.report({ busy: slot === 'rough' ? 'rough' : slot === 'base' ? 'sharp' : 'detail' });
    try {
      const omitGround = this.holdsGround(slot, level, region, photo);
      const received = await requestPiece(
        { photoId: photo.photoId, ...look, side: this.side, slot, level, region, omitGround },
        abort.signal,
        this.compositor.makeRoom,
      );
      if (!abort.signal.aborted) this.take(slot, key, received);
    } catch (error) {
      if (!isUnwanted(error) && this.photo?.photoId === photo.photoId)
        this.report({ trouble: troubleOf(error), busy: 'no' });
    } finally {
      if (this.work[slot] === abort) delete this.work[slot];
    }
  }

  private holdsGround(slot: PieceSlot, level: number, region: Rect | undefined, photo: OpenedPhoto): boolean {
    const held = this.held[slot];
    if (!held || held.source !== photo.stage || slot === 'rough') return false;
    return held.level === level && (region === undefined || isSameRect(held.region, region));
  }

  private take(slot: PieceSlot, key: string, { piece, header }: ReceivedPiece): void {
    this.compositor.setPiece(this.side, slot, piece);
    this.held[slot] = { key, level: header.level, region: header.region, source: header.source };
    this.showHeld();
    this.report({ trouble: null });
    const detail = { side: this.side, slot, level: header.level, key };
    window.dispatchEvent(new CustomEvent('oxgall:piece', { detail }));
  }

  /** The base where it is of the wanted strata, else the rough one; the detail over it where it still holds. */
  private showHeld(): void {
    const { base, rough, detail } = this.held;
    const isBaseFresh = base?.key === this.wantedKey;
    const isRoughFresh = rough?.key === this.wantedKey;
    const under: PieceSlot | null = isBaseFresh
      ? 'base'
      : isRoughFresh || !base
        ? rough
          ? 'rough'
          : null
        : this.work.rough && rough && this.shown.includes('rough')
          ? 'rough'
          : 'base';
    const isDetailFresh = detail?.key === this.wantedKey && this.wantedDetail() !== null;
    const slots = [under, isDetailFresh ? 'detail' : null].filter((slot) => slot !== null);
    const isRough = under !== 'base' && !(isDetailFresh && !this.needsDetail());
    this.report({ isRough: isRough || this.needsDetail() });
    this.setShown(slots as PieceSlot[]);
  }

  private setShown(slots: readonly PieceSlot[]): void {
    this.shown = slots;
    this.onShown();
  }

  private settle(): void {
    const isWorking = Object.keys(this.work).length > 0;
    const isBaseFresh = this.held.base?.key === this.wantedKey;
    if (isWorking || !isBaseFresh || this.needsDetail()) return;
    this.report({ busy: 'no' });
    this.onSettled();
  }

  private stopAll(): void {
    clearTimeout(this.sharpTimer);
    clearTimeout(this.detailTimer);
    this.roughAgain = false;
    for (const abort of Object.values(this.work)) abort.abort();
  }

  private report(change: Partial<PaintState>): void {
    if (this.side === 'easel') paintStore.update((state) => ({ ...state, ...change }));
  }
}

function isSameRect(a: Rect, b: Rect): boolean {
  return a.xPx === b.xPx && a.yPx === b.yPx && a.widthPx === b.widthPx && a.heightPx === b.heightPx;
}
