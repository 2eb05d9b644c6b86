import { Presets, SingleBar } from 'cli-progress';
import { duration } from './numbers.js';

export interface ProgressState {
  readonly stage: string;
  readonly done: number;
  readonly total: number;
  /** What is best so far, in words; empty for nothing yet. */
  readonly best: string;
}

export interface Progress {
  /** False where nobody sees it: what it would say need not be found out. */
  readonly shown: boolean;
  update(state: ProgressState): void;
  stop(): void;
}

const SILENT: Progress = { shown: false, update: () => undefined, stop: () => undefined };

/** Work that was there before the clock started does not count for the speed. */
function timeLeft(began: { time: number; done: number }, state: ProgressState): string {
  const seconds = (Date.now() - began.time) / 1000;
  const speed = (state.done - began.done) / seconds;
  if (seconds < 0.5 || !(speed > 0)) return '';
  return ` · about ${duration((state.total - state.done) / speed)} left`;
}

/** A progress bar on a terminal, nothing elsewhere. */
export function progressBar(stream: NodeJS.WritableStream, unit: string): Progress {
  if ((stream as { isTTY?: boolean }).isTTY !== true) return SILENT;
  const bar = new SingleBar(
    {
      stream,
      format: `{bar} {value}/{total} ${unit} · {stage}{best}{left}`,
      barsize: 24,
      hideCursor: true,
      clearOnComplete: true,
      stopOnComplete: false,
      emptyOnZero: true,
    },
    Presets.shades_classic,
  );
  let began: { time: number; done: number } | null = null;
  return {
    shown: true,
    update(state) {
      if (began === null) {
        began = { time: Date.now(), done: state.done };
        bar.start(state.total, state.done, { stage: state.stage, best: '', left: '' });
      }
      const best = state.best === '' ? '' : ` · ${state.best}`;
      bar.setTotal(state.total);
      bar.update(state.done, { stage: state.stage, best, left: timeLeft(began, state) });
    },
    stop() {
      if (began !== null) bar.stop();
    },
  };
}
