export interface ListedPlate {
  number: number;
  name: string;
  caption: string;
  widthPx: number;
  heightPx: number;
  orientation: number;
}

export interface RenderedPlate {
  number: number;
  name: string;
  path: string;
  widthPx: number;
  heightPx: number;
  orientation: number;
  milliseconds: number;
}

export interface RenderOptions {
  outDir: string;
  numbers?: number[];
  scale?: number;
  firstLook?: boolean;
  workers?: number;
  onFrame?: (plate: RenderedPlate) => void;
  signal?: AbortSignal;
}

export function listDemoSeries(): ListedPlate[];
export function renderDemoSeries(options: RenderOptions): Promise<RenderedPlate[]>;
