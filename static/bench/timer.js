// Time on the bench: counted from the moments in the journal, so that a reload or a sleeping tablet changes nothing.

import { useEffect, useState } from "../parts/html.js";

const SECOND = 1000;

/** The present, drawn anew every second. */
export function useNow() {
  const [now, setNow] = useState(Date.now());
  useEffect(() => {
    const timer = setInterval(() => setNow(Date.now()), SECOND);
    return () => clearInterval(timer);
  }, []);
  return now;
}

/** When a run's heating is over, in milliseconds since 1970. */
export const heatedAt = (run) => new Date(run.heating.started_at).getTime() + run.heating.minutes * 60 * SECOND;

/** When the tubes of a run may be opened or read. */
export const cooledAt = (run, minutes) => new Date(run.heating.ended_at).getTime() + minutes * 60 * SECOND;

/** A time span as 1:05:09. */
export function span(ms) {
  const s = Math.max(0, Math.round(ms / SECOND));
  const pad = (n) => String(n).padStart(2, "0");
  const hours = Math.floor(s / 3600);
  return `${hours ? `${hours}:` : ""}${hours ? pad(Math.floor(s / 60) % 60) : Math.floor(s / 60)}:${pad(s % 60)}`;
}

/** Tell once, also in the background, that a time is over. */
export function useAlarm(due, now, words) {
  const [told, setTold] = useState(now >= due);
  useEffect(() => {
    if (told || now < due) return;
    setTold(true);
    navigator.vibrate?.([300, 150, 300]);
    if (globalThis.Notification?.permission === "granted") {
      navigator.serviceWorker?.ready.then((worker) => worker.showNotification(words)).catch(() => {});
    }
  }, [now, due, told, words]);
}

/** Whether the browser may still be asked to notify. */
export const canAsk = () => globalThis.Notification?.permission === "default";
