// Numbers and moments as they are shown. What was typed is stored elsewhere; nothing here is ever saved.

const GROUP = "\u202f";

/** A number with groups of three digits, as few decimals as it needs. */
export function plain(value, decimals = 0) {
  if (value === null || value === undefined || Number.isNaN(value)) return "–";
  const [whole, rest] = Math.abs(value).toFixed(decimals).split(".");
  const grouped = whole.replace(/\B(?=(\d{3})+$)/gu, GROUP);
  return `${value < 0 ? "−" : ""}${grouped}${rest ? `.${rest}` : ""}`;
}

/** An expectation: two significant figures, since it promises no more. */
export function rough(value) {
  if (!Number.isFinite(value) || value <= 0) return "–";
  const step = 10 ** (Math.floor(Math.log10(value)) - 1);
  const rounded = Math.round(value / step) * step;
  return plain(rounded, step < 1 ? -Math.floor(Math.log10(step)) : 0);
}

/** A reported text such as "2210" or "< 100", its digits grouped; sign and number never part. */
export const reported = (text) => (text ?? "").replace(/\d{4,}/u, (digits) => plain(Number(digits))).replace(" ", "\u00a0");

/** A share as a whole percentage that never says 0 or 100 when it is neither. */
export function percent(share) {
  const rounded = Math.round(share * 100);
  if (rounded === 0 && share > 0) return "< 1\u00a0%";
  if (rounded === 100 && share < 1) return "> 99\u00a0%";
  return `${rounded}\u00a0%`;
}

/** A dilution in words: "undiluted", or "1:5" for a factor of 5 (one part made up to five). */
export const dilution = (factor) => (factor === 1 ? "undiluted" : `1:${plain(factor, Number.isInteger(factor) ? 0 : 1)}`);

const pad = (n) => String(n).padStart(2, "0");

function parts(moment, zone) {
  const format = new Intl.DateTimeFormat("en-CA", {
    timeZone: zone, year: "numeric", month: "2-digit", day: "2-digit", hour: "2-digit", minute: "2-digit", hourCycle: "h23",
  });
  return Object.fromEntries(format.formatToParts(new Date(moment)).map((p) => [p.type, p.value]));
}

/** A day as 2031-06-01, in the programme's zone. */
export function day(moment, zone) {
  if (!moment) return "–";
  const { year, month, day: d } = parts(moment, zone);
  return `${year}-${month}-${d}`;
}

/** A clock time as 14:05. */
export function clock(moment, zone) {
  if (!moment) return "–";
  const { hour, minute } = parts(moment, zone);
  return `${hour}:${minute}`;
}

/** A moment as 2031-06-01 14:05. */
export const dayAndTime = (moment, zone) => (moment ? `${day(moment, zone)} ${clock(moment, zone)}` : "–");

/** How long ago, in words. */
export function ago(moment, now = Date.now()) {
  const minutes = Math.round((now - new Date(moment).getTime()) / 60000);
  if (minutes < 1) return "just now";
  if (minutes < 60) return `${minutes} min ago`;
  if (minutes < 48 * 60) return `${Math.round(minutes / 60)} h ago`;
  return `${Math.round(minutes / 1440)} days ago`;
}

/** Time left until a moment, in words; the sign says when it has passed. */
export function left(moment, now = Date.now()) {
  const minutes = Math.round((new Date(moment).getTime() - now) / 60000);
  const size = Math.abs(minutes);
  const words = size < 60 ? `${size} min` : size < 48 * 60 ? `${Math.floor(size / 60)} h ${pad(size % 60)} min` : `${Math.floor(size / 1440)} days`;
  return minutes >= 0 ? `${words} left` : `${words} over`;
}

/** The local moment as an input of type datetime-local wants it. */
export function localInput(moment = new Date()) {
  return `${moment.getFullYear()}-${pad(moment.getMonth() + 1)}-${pad(moment.getDate())}T${pad(moment.getHours())}:${pad(moment.getMinutes())}`;
}
