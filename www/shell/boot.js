// Starts the page: the newest build first, then the faces, then the program.
// What is here must work when the program doesn't: it also shows the notice that lets a presenter go on.

const calm = document.getElementById("calm");

/** Shows the notice over whatever was drawn last. */
function showCalm(title, text) {
  document.getElementById("calm-title").textContent = title;
  document.getElementById("calm-text").textContent = text;
  calm.hidden = false;
  document.getElementById("calm-go-on").focus();
}

document.getElementById("calm-go-on").addEventListener("click", () => location.reload());

// The program sends this before it stops for good. Its place in the show has been kept, so a reload goes on from it.
document.addEventListener("fallaround-broken", () => {
  showCalm("The picture stays where it is", "Something in the program went wrong. Going on takes a second and comes back to this beat.");
});

/** The build that the server has now; null without a server. */
async function servedVersion() {
  try {
    const answer = await fetch("version.txt", { cache: "no-store", signal: AbortSignal.timeout(800) });
    return answer.ok ? (await answer.text()).trim() : null;
  } catch {
    return null;
  }
}

/** Resolves when the worker has taken over or has given up. */
function settled(worker) {
  return new Promise((done) => {
    const look = () => {
      if (worker.state === "activated" || worker.state === "redundant") done(worker.state === "activated");
    };
    worker.addEventListener("statechange", look);
    look();
  });
}

/**
 * Keeps the page working without a server, and replaces an older build before anything is running.
 * Returns true when the page is about to be loaded anew.
 */
async function keepOffline() {
  if (!("serviceWorker" in navigator) || !isSecureContext) return false;
  const controller = navigator.serviceWorker.controller;
  const running = controller && new URL(controller.scriptURL).searchParams.get("v");
  const version = (await servedVersion()) ?? running;
  if (!version) return false;
  document.documentElement.dataset.build = version;
  const url = new URL(`sw.js?v=${encodeURIComponent(version)}`, location.href).href;
  if (version === running) return false;
  try {
    const registration = await navigator.serviceWorker.register(url, { updateViaCache: "none" });
    const coming = registration.installing ?? registration.waiting;
    if (!controller || !coming) return false;
    // An older build answered this page. The new one is here in a moment; nothing has been started yet.
    const replaced = await Promise.race([settled(coming), new Promise((late) => setTimeout(late, 8000, false))]);
    if (replaced) location.reload();
    return replaced;
  } catch {
    return false; // Without it the page works as long as the server does.
  }
}

/** Loads every face, so that the first picture already has the right letters. */
function loadFaces() {
  const faces = [...document.fonts].map((face) => face.load().catch(() => null));
  return Promise.race([Promise.all(faces), new Promise((late) => setTimeout(late, 3000))]);
}

async function start() {
  if (await keepOffline()) return;
  try {
    const [app] = await Promise.all([import("./app.js"), loadFaces()]);
    await app.default({ module_or_path: new URL("app_bg.wasm", import.meta.url) });
    for (const name of ["fallaround_frame", "fallaround_fingerprint"]) {
      Object.defineProperty(window, name, { value: app[name], writable: false });
    }
    app.page_main();
    document.documentElement.dataset.ready = "true";
  } catch (error) {
    console.error(error);
    showCalm("Fallaround couldn't start", "The browser couldn't load the program. A browser from 2023 or later is needed; loading the page again may help.");
  }
}

start();
