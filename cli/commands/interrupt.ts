import type { Context } from './contract.js';

/**
 * Does work whose signal is aborted by SIGINT. Only the first one is caught: a second Ctrl-C ends the process at once,
 * so whatever is on disk must be sound at any time.
 */
export async function untilInterrupted<T>(
  context: Context,
  work: (signal: AbortSignal) => Promise<T>,
): Promise<T> {
  const abort = new AbortController();
  const signals = context.streams.signals ?? process;
  const onInterrupt = () => abort.abort();
  signals.once('SIGINT', onInterrupt);
  try {
    return await work(abort.signal);
  } finally {
    signals.off('SIGINT', onInterrupt);
  }
}
