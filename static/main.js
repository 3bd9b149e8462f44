// The client begins here: the device's records are read, the screen is drawn from them, then the exchange starts.

import { html, render, useEffect, useRef, useState } from "./parts/html.js";
import { getMeta, keepReserve, store } from "./parts/db.js";
import { askToKeep, gradeNow } from "./parts/durability.js";
import { askState } from "./parts/session.js";
import { startSync } from "./parts/sync.js";
import { offer } from "./parts/update.js";
import { loadUnits } from "./parts/units.js";
import { load } from "./parts/view.js";
import { loadDrafts } from "./parts/fields.js";
import { go } from "./parts/frame.js";
import { bench } from "./bench/index.js";
import { field } from "./field/index.js";
import { review } from "./review/index.js";
import { Emergency } from "./pages/emergency.js";
import { applyComfort, Settings } from "./pages/settings.js";
import { SignIn } from "./pages/sign_in.js";
import { Start } from "./pages/start.js";
import { Waiting } from "./pages/waiting.js";

const PAGES = new Map([
  ["start", Start], ["sign-in", SignIn], ["settings", Settings], ["waiting", Waiting], ["emergency", Emergency],
]);
const PLACES = new Map([["field", field], ["bench", bench], ["review", review]]);

/** Draw on an emptied root: what index.html shows while opening is not ours to keep. */
function draw(screen) {
  const root = document.getElementById("app");
  render(null, root);
  root.replaceChildren();
  render(screen, root);
}

function screenOf(path) {
  const [first, ...rest] = path.split("/").filter(Boolean).map(decodeURIComponent);
  if (PAGES.has(first)) return html`<${PAGES.get(first)} />`;
  return (PLACES.get(first) ?? field)(rest);
}

function App() {
  const [path, setPath] = useState(location.pathname);
  useEffect(() => {
    const moved = () => {
      setPath(location.pathname);
      scrollTo(0, 0);
    };
    addEventListener("popstate", moved);
    addEventListener("weirbook-moved", moved);
    return () => {
      removeEventListener("popstate", moved);
      removeEventListener("weirbook-moved", moved);
    };
  }, []);
  const first = useRef(true);
  useEffect(() => {
    if (!first.current) document.getElementById("main")?.focus({ preventScroll: true });
    first.current = false;
  }, [path]);
  return screenOf(path);
}

function followLinks() {
  document.addEventListener("click", (event) => {
    const link = event.target.closest?.("a[href]");
    const modified = event.metaKey || event.ctrlKey || event.shiftKey || event.button !== 0;
    if (!link || modified || link.target || link.hasAttribute("download")) return;
    const url = new URL(link.href);
    if (url.hash && url.pathname === location.pathname) return;
    if (url.origin !== location.origin || /^\/(api|verify|static)\//u.test(url.pathname)) return;
    event.preventDefault();
    go(url.pathname);
  });
}

const TRIES = 3;
const TRY_AGAIN_MS = 3000;

/** A first install that fails (one file did not come) leaves nothing behind: it is tried again while the page is open. */
async function install(tries = TRIES) {
  const registration = await navigator.serviceWorker.register("/sw.js", { updateViaCache: "none" });
  const worker = registration.installing;
  worker?.addEventListener("statechange", () => {
    if (worker.state === "redundant" && !registration.active && tries > 0) setTimeout(() => { install(tries - 1).catch(() => {}); }, TRY_AGAIN_MS);
  });
  return registration;
}

async function registerWorker() {
  if (!("serviceWorker" in navigator)) return;
  const registration = await install();
  offer(registration.waiting);
  registration.addEventListener("updatefound", () => {
    const worker = registration.installing;
    worker?.addEventListener("statechange", () => { if (worker.state === "installed") offer(worker); });
  });
  let controlled = Boolean(navigator.serviceWorker.controller);
  navigator.serviceWorker.addEventListener("controllerchange", () => {
    if (controlled) location.reload();
    controlled = true;
  });
}

async function firstScreen() {
  const state = await askState();
  const here = await getMeta("person");
  if (state && !state.started) return "/start";
  if (!here?.id) return "/sign-in";
  return null;
}

/** While the store cannot be opened nothing is drawn but why. */
function sayTrouble() {
  if (store.trouble) draw(html`<main class="page"><h1>Weirbook cannot open yet</h1><p role="alert">${store.trouble}</p></main>`);
}

async function begin() {
  applyComfort();
  addEventListener("weirbook-store", sayTrouble);
  await Promise.all([loadUnits(), load(), loadDrafts(), gradeNow().catch(() => {})]);
  followLinks();
  const open = location.pathname === "/emergency" || location.pathname === "/start";
  const here = await getMeta("person");
  if (!here?.id && !open) {
    const first = await firstScreen();
    if (first) history.replaceState(null, "", first);
  } else if (location.pathname === "/") {
    history.replaceState(null, "", "/field");
  }
  removeEventListener("weirbook-store", sayTrouble);
  draw(html`<${App} />`);
  askToKeep().catch(() => {});
  await registerWorker().catch(() => {});
  await keepReserve().catch(() => {});
  await startSync();
}

begin().catch((error) => {
  const words = error.message || "This browser does not let Weirbook work here.";
  draw(html`<main class="page"><h1>Weirbook cannot open here</h1><p role="alert">${words}</p></main>`);
});

