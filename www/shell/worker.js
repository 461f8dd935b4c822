// The worker: the same program, without a page. It announces itself once it can hear.
import init, { worker_main } from "./app.js";

await init({ module_or_path: new URL("app_bg.wasm", import.meta.url) });
worker_main();
