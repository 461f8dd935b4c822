// Keeps a whole build, so that a show opens with no server and no network.
// The query names the build; a new build is a new worker with a cache of its own.

const VERSION = new URL(location.href).searchParams.get("v") ?? "unknown";
const CACHE = `fallaround-build-${VERSION}`;
const FILES = [
  "./",
  "app.js",
  "app_bg.wasm",
  "boot.js",
  "fonts.css",
  "fonts/literata-latin-400.woff2",
  "fonts/literata-latin-ext-400.woff2",
  "fonts/mono-latin-400.woff2",
  "fonts/mono-latin-ext-400.woff2",
  "fonts/next-latin-400.woff2",
  "fonts/next-latin-500.woff2",
  "fonts/next-latin-600.woff2",
  "fonts/next-latin-700.woff2",
  "fonts/next-latin-ext-400.woff2",
  "fonts/next-latin-ext-500.woff2",
  "fonts/next-latin-ext-600.woff2",
  "fonts/next-latin-ext-700.woff2",
  "icons/fallaround-192.png",
  "icons/fallaround-512.png",
  "icons/fallaround.svg",
  "manifest.webmanifest",
  "present.css",
  "scenarios/index.json",
  "start.css",
  "style.css",
  "tokens.css",
  "worker.js",
];

/** Fetches one file past every other cache and keeps it. */
async function keep(cache, path) {
  const answer = await fetch(path, { cache: "no-store" });
  if (!answer.ok) throw new Error(`${path}: ${answer.status}`);
  await cache.put(path, answer.clone());
  return answer;
}

async function install() {
  const cache = await caches.open(CACHE);
  await Promise.all(FILES.map((path) => keep(cache, path)));
  const names = await (await cache.match("scenarios/index.json")).json();
  await Promise.all(names.map((name) => keep(cache, `scenarios/${encodeURIComponent(name)}`)));
  await self.skipWaiting();
}

async function activate() {
  for (const name of await caches.keys()) {
    if (name.startsWith("fallaround-build-") && name !== CACHE) await caches.delete(name);
  }
  await self.clients.claim();
}

/** The kept file, or the server's; what was kept is never looked up twice. */
async function answer(request) {
  const cache = await caches.open(CACHE);
  const kept = request.mode === "navigate" ? await cache.match("./") : await cache.match(request, { ignoreSearch: true });
  return kept ?? fetch(request);
}

self.addEventListener("install", (event) => event.waitUntil(install()));
self.addEventListener("activate", (event) => event.waitUntil(activate()));
self.addEventListener("fetch", (event) => {
  const url = new URL(event.request.url);
  const own = event.request.method === "GET" && url.origin === location.origin;
  // The version is asked of the server alone: it is how a new build is noticed.
  if (own && !url.pathname.endsWith("/version.txt")) event.respondWith(answer(event.request));
});
