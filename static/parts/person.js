// Who is here: entries made on this device are theirs.

import { useEffect, useState } from "./html.js";
import { whoIsHere } from "./session.js";

/** Who is here, or null while that is looked up. */
export function usePerson() {
  const [person, setPerson] = useState(null);
  useEffect(() => { whoIsHere().then(setPerson, () => {}); }, []);
  return person;
}
