/* On every page of the phone: words and addresses, the worker that keeps pages for later, the line
   that says what waits. A phone that changes hands keeps no page of the person before. */
"use strict";

window.underbund = window.underbund || {};

underbund.addresses = { parcels: "/api/v1/parcels", levels: "/api/v1/levels", photos: "/api/v1/photos", box: "/today/parcel/" };

underbund.say = (name, filled = {}) => {
  const found = document.querySelector(`#words [data-word="${name}"]`);
  const words = found ? found.textContent.trim() : name;
  return words.replace(/\{(\w+)\}/g, (whole, key) => (key in filled ? filled[key] : whole));
};

(() => {
  const { store, say } = underbund;
  const PAGES = "underbund-pages", LATE_MS = 3 * 24 * 3600 * 1000;
  const person = document.querySelector("[data-person]")?.dataset.person || "";

  async function onePerson() {
    const before = await store.get("about", "person");
    if (before && before.value === person) return;
    if (before) await caches.delete(PAGES);
    await store.put("about", { name: "person", value: person });
  }

  /* All that today asks for is fetched once while there is signal, so that it is there without. */
  async function keepPages() {
    if (!("caches" in window) || !navigator.onLine) return;
    const links = [...document.querySelectorAll("a[data-keep]")].map((one) => one.href);
    if (!links.length) return;
    const pages = await caches.open(PAGES);
    let lacking = 0;
    for (const link of [location.href, ...links, underbund.addresses.box]) {
      try {
        const got = await fetch(link, { credentials: "same-origin" });
        if (got.ok && !got.redirected) await pages.put(link, got);
        else lacking += 1;
      } catch {
        lacking += 1;
      }
    }
    const line = document.querySelector("[data-ready]");
    if (line) {
      line.textContent = say(lacking ? "not-ready" : "ready", { count: links.length });
      line.hidden = false;
    }
  }

  async function count() {
    const line = document.querySelector("[data-count-waiting]");
    if (!line) return;
    const open = (await store.all("records")).filter((one) => one.waits || one.result === "refused");
    const late = open.some((one) => Date.now() - new Date(one.made) > LATE_MS);
    line.textContent = say(late ? "late-line" : "waiting", { count: open.length });
    line.classList.toggle("stop", late);
    line.parentElement.hidden = !open.length;
  }

  addEventListener("DOMContentLoaded", async () => {
    if (!person) return;
    await onePerson();
    if ("serviceWorker" in navigator && isSecureContext) {
      await navigator.serviceWorker.register("/today/worker.js", { scope: "/today/" });
      await keepPages();
    }
    await count();
    document.addEventListener("underbund:sent", count);
  });
})();
