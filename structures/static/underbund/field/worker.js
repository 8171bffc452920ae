/* The phone's pages without signal: what they need is kept on the phone, the newest page seen is
   shown when the net is gone or too slow. Nothing is sent from here. SHELL and EDITION stand above. */
"use strict";

const HOME = "/today/", PATIENCE_MS = 6000;
const KEPT = "underbund-shell-" + EDITION, PAGES = "underbund-pages";

self.addEventListener("install", (event) => {
  event.waitUntil(caches.open(KEPT).then((kept) => kept.addAll(SHELL)).then(() => self.skipWaiting()));
});

self.addEventListener("activate", (event) => {
  event.waitUntil((async () => {
    const names = await caches.keys();
    const old = names.filter((one) => one.startsWith("underbund-shell-") && one !== KEPT);
    await Promise.all(old.map((one) => caches.delete(one)));
    await self.clients.claim();
  })());
});

self.addEventListener("fetch", (event) => {
  const { request } = event, address = new URL(request.url);
  if (request.method !== "GET" || address.origin !== self.location.origin) return;
  if (address.pathname.startsWith("/static/")) event.respondWith(fromShell(request));
  else if (address.pathname.startsWith(HOME)) event.respondWith(fromNet(event));
});

async function fromShell(request) {
  const found = await caches.match(request);
  return found || fetch(request);
}

async function fromNet(event) {
  const { request } = event;
  const answer = fetch(request).then(async (got) => {
    if (got.ok && got.type === "basic" && !got.redirected) {
      await (await caches.open(PAGES)).put(request, got.clone());
    }
    return got;
  });
  event.waitUntil(answer.catch(() => {}));
  const late = new Promise((resolve) => setTimeout(resolve, PATIENCE_MS, null));
  const soon = await Promise.race([answer.catch(() => null), late]);
  if (soon && soon.status < 500) return soon;
  const pages = await caches.open(PAGES);
  const seen = (await pages.match(request, { ignoreVary: true }))
    || (request.mode === "navigate" && (await pages.match(HOME, { ignoreVary: true })));
  return seen || answer;
}
