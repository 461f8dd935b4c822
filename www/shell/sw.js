// Keeps a whole build, so that a show opens with no server and no network.
// A new build is a new worker with a cache of its own.

// The build fills in its own version and the paths of all its files.
const VERSION = "__VERSION__";
const FILES = ["__FILES__"];
const CACHE = `fallaround-build-${VERSION}`;

/** Fetches one file past every other cache and keeps it. */
async function keep(cache, path) {
  const answer = await fetch(path, { cache: "no-store" });
  if (!answer.ok) throw new Error(`${path}: ${answer.status}`);
  await cache.put(path, answer);
}

async function install() {
  const cache = await caches.open(CACHE);
  await Promise.all(FILES.map((path) => keep(cache, path)));
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
  if (!own) return;
  // The version is asked of the server first: it is how a new build is noticed.
  const asked = url.pathname.endsWith("/version.txt");
  event.respondWith(asked ? fetch(event.request).catch(() => new Response(VERSION)) : answer(event.request));
});
