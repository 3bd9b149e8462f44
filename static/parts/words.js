// Gates, hazards and emergency lines: the server's words, kept on the device, shown without signing in.

import { getMeta, putMeta } from "./db.js";
import { ask } from "./session.js";
import { useEffect, useState } from "./html.js";

/** The words kept on this device; asked for anew when the server answers. */
export function useWords() {
  const [words, setWords] = useState(null);
  useEffect(() => {
    let here = true;
    const show = (found) => { if (here && found) setWords(found); };
    getMeta("words").then(show).catch(() => {});
    ask("GET", "/api/words")
      .then((found) => { show(found); return putMeta("words", found); })
      .catch(() => {});
    return () => { here = false; };
  }, []);
  return words;
}
