// How lasting this browser's storage is, graded: the less it promises, the sooner unsent entries are called old.

const HOUR_MS = 3_600_000;

/** The grade of this moment; best effort until the browser says more. */
export const durability = { kept: false, warnAfterMs: HOUR_MS };

function grade(kept) {
  Object.assign(durability, { kept, warnAfterMs: kept ? 4 * HOUR_MS : HOUR_MS });
  return durability;
}

/** The grade as it stands, without asking anybody. */
export const gradeNow = async () => grade(Boolean(await navigator.storage?.persisted?.()));

/** Ask the browser to keep what is recorded here; it may refuse. */
export const askToKeep = async () => grade(Boolean(await navigator.storage?.persist?.().catch(() => false)));

/** The grade in words. */
export const gradeWords = ({ kept, warnAfterMs }) => (kept
  ? `Lasting: this browser keeps what is recorded here until you delete it. Unsent entries are called old after ${warnAfterMs / HOUR_MS} hours.`
  : "Best effort: this browser may delete what is recorded here when it runs out of room. Unsent entries are called old after 1 hour; send them soon.");
