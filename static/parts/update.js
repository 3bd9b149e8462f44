// A newer build that waits: kept here, since the frame that offers it comes and goes with the screens.

export const update = { worker: null };

/** A worker of another build is installed. */
export function offer(worker) {
  if (!worker || !navigator.serviceWorker.controller) return;
  update.worker = worker;
  dispatchEvent(new Event("weirbook-update"));
}
