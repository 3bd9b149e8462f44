// One cache a build: a page never gets files of two builds. The server fills in the build and the list of files.

const BUILD = "__BUILD__";
const SHELL = /*__SHELL__*/[];
const CACHE = `weirbook-${BUILD}`;

async function install() {
  const before = await caches.has(CACHE);
  const cache = await caches.open(CACHE);
  try {
    await cache.addAll(SHELL.map((path) => new Request(path, { cache: "reload" })));
  } catch (error) {
    if (!before) await caches.delete(CACHE);
    throw error;
  }
}

async function activate() {
  const names = await caches.keys();
  await Promise.all(names.filter((name) => name.startsWith("weirbook-") && name !== CACHE).map((name) => caches.delete(name)));
  await self.clients.claim();
}

async function answer(request, path) {
  const cache = await caches.open(CACHE);
  return (await cache.match(path)) ?? fetch(request);
}

self.addEventListener("install", (event) => event.waitUntil(install()));
self.addEventListener("activate", (event) => event.waitUntil(activate()));
self.addEventListener("message", (event) => {
  if (event.data === "update") event.waitUntil(self.skipWaiting());
});
self.addEventListener("fetch", (event) => {
  const url = new URL(event.request.url);
  if (event.request.method !== "GET" || url.origin !== self.location.origin) return;
  if (/^\/(api|verify|healthz|readyz|sw\.js)/u.test(url.pathname)) return;
  const screen = event.request.mode === "navigate";
  event.respondWith(answer(event.request, screen ? "/" : url.pathname));
});
