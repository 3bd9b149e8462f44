// Talking to the server. Its words are shown as they come; a page that is not ours is no answer.

import { getMeta, putMeta } from "./db.js";

/** An answer of the server that is an error, in its own words. */
export class Refusal extends Error {
  constructor(status, body) {
    super(body.error);
    this.status = status;
    this.code = body.code;
    this.fields = body.fields ?? {};
  }
}

/** There was no answer of our server. */
export class NoContact extends Error {
  constructor() {
    super("The server cannot be reached from here. What is recorded on this tablet is kept and goes out later.");
  }
}

async function answerOf(response) {
  let body;
  try {
    body = await response.json();
  } catch {
    throw new NoContact();
  }
  if (response.ok) return body;
  if (typeof body.error !== "string" || response.status === 511) throw new NoContact();
  throw new Refusal(response.status, body);
}

/** Ask the server; throws Refusal or NoContact. */
export async function ask(method, path, given) {
  const headers = { "X-Weirbook": "1", Accept: "application/json" };
  if (method !== "GET") headers["Content-Type"] = "application/json";
  let response;
  try {
    response = await fetch(path, {
      method,
      headers,
      body: method === "GET" ? undefined : JSON.stringify(given ?? {}),
      credentials: "same-origin",
      redirect: "error",
      signal: AbortSignal.timeout(20000),
    });
  } catch {
    throw new NoContact();
  }
  return answerOf(response);
}

/** Keep what the server said of itself and of who is signed in. */
export async function keep(state) {
  if (!state.weirbook) throw new NoContact();
  const skew = Math.round(Date.now() - new Date(state.server_time).getTime());
  await putMeta("contact", { at: new Date().toISOString(), skew_ms: skew });
  await putMeta("server", { started: state.started, example: state.example, build: state.build, backup: state.backup ?? null });
  if (state.person) await putMeta("person", state.person);
  return state;
}

/** The server's state, or null without contact. */
export async function askState() {
  try {
    return await keep(await ask("GET", "/api/state"));
  } catch (error) {
    if (error instanceof NoContact) return null;
    throw error;
  }
}

/** Who last signed in on this device: entries are theirs. */
export const whoIsHere = () => getMeta("person");
