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

/** A time in the title of the page, so that a tab in the background shows it; the title before it comes back. */
export function useTitle(words) {
  useEffect(() => {
    const before = document.title;
    return () => { document.title = before; };
  }, []);
  useEffect(() => { document.title = `${words} · Bench · Weirbook`; }, [words]);
}

let player = null;

/** Whether this browser can make a sound. */
export const canSound = () => typeof globalThis.AudioContext === "function";

/** [whether it will sound, how to allow it]: a browser lets a page sound only after a tap on it. */
export function useSound() {
  const [on, setOn] = useState(player?.state === "running");
  const allow = () => {
    player ??= new AudioContext();
    player.resume().then(() => { setOn(true); beep(1); }).catch(() => {});
  };
  return [on, allow];
}

function beep(times) {
  for (let i = 0; player?.state === "running" && i < times; i += 1) {
    const tone = player.createOscillator();
    const volume = player.createGain();
    const from = player.currentTime + 0.5 * i;
    volume.gain.value = 0.2;
    tone.frequency.value = 880;
    tone.connect(volume).connect(player.destination);
    tone.start(from);
    tone.stop(from + 0.25);
  }
}

/** Tell once, also in the background, that a time is over. */
export function useAlarm(due, now, words) {
  const [told, setTold] = useState(now >= due);
  useEffect(() => {
    if (told || now < due) return;
    setTold(true);
    navigator.vibrate?.([300, 150, 300]);
    beep(6);
    if (globalThis.Notification?.permission === "granted") {
      navigator.serviceWorker?.ready.then((worker) => worker.showNotification(words)).catch(() => {});
    }
  }, [now, due, told, words]);
}

/** Whether the browser may still be asked to notify. */
export const canAsk = () => globalThis.Notification?.permission === "default";
