// Gates, hazards and emergency lines: part of the shell, so at hand wherever the client opens, without signing in.

import { useEffect, useState } from "./html.js";

let kept = null;

async function read() {
  if (kept) return kept;
  const response = await fetch("/words.json");
  if (!response.ok) throw new Error("The words of safety were not told.");
  kept = await response.json();
  return kept;
}

/** The words of this build; null until they are read. */
export function useWords() {
  const [words, setWords] = useState(kept);
  useEffect(() => {
    let here = true;
    read().then((found) => { if (here) setWords(found); }).catch(() => {});
    return () => { here = false; };
  }, []);
  return words;
}
