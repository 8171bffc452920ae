/* Sending: photos first, then records in one parcel. What the office answers is written beside
   each record; only what it has is taken off this phone. */
"use strict";

window.underbund = window.underbund || {};

underbund.send = (() => {
  const { store } = underbund;
  const PARCEL_MOST = 50, EVERY_MS = 60000;
  const HAS_IT = ["kept", "already here", "held"];
  let going = null;

  const cookie = (name) =>
    (document.cookie.split("; ").find((one) => one.startsWith(`${name}=`)) || "").slice(name.length + 1);

  class Stopped extends Error {
    constructor(why, words) {
      super(words || why);
      this.why = why;
    }
  }

  async function post(address, body, headers = {}) {
    let answer;
    try {
      answer = await fetch(address, {
        method: "POST", body, credentials: "same-origin", redirect: "manual",
        headers: { Accept: "application/json", "X-CSRFToken": cookie("csrftoken"), ...headers },
      });
    } catch {
      throw new Stopped("no-net");
    }
    if (answer.status === 401 || answer.status === 403) throw new Stopped("sign-in");
    const said = await answer.json().catch(() => null);
    if (answer.status === 429 || answer.status >= 500 || said === null) throw new Stopped("office");
    return { ok: answer.ok, said };
  }

  /* Photos that the office does not take are told at their record; the others are on their way. */
  async function sendPhotos(record) {
    for (const id of record.sends.photos || []) {
      const one = await store.get("photos", id);
      if (!one) continue;
      const form = new FormData();
      for (const key of ["id", "site", "what", "taken_at", "lat", "lon", "accuracy_m"]) {
        if (one[key] !== undefined && one[key] !== null && one[key] !== "") form.append(key, one[key]);
      }
      form.append("photo", new Blob([one.bytes], { type: "image/jpeg" }), `${one.id}.jpg`);
      const { ok, said } = await post(underbund.addresses.photos, form);
      if (!ok) return [{ what: said.detail, remedy: "", level: "block" }];
      await store.drop("photos", id);
    }
    return [];
  }

  async function sendParcel(records) {
    const parcel = {
      parcel: crypto.randomUUID(), device: await device(), by: records[0].by,
      sent: new Date().toISOString(), records: records.map((one) => one.sends),
    };
    const { ok, said } = await post(underbund.addresses.parcels, JSON.stringify(parcel), {
      "Content-Type": "application/json",
    });
    if (!ok) throw new Stopped("parcel-refused", said.detail);
    const answers = new Map(said.records.map((one) => [one.id, one]));
    for (const record of records) {
      const answer = answers.get(record.id);
      if (answer) await write(record, answer.result, answer.findings);
    }
  }

  /* Readings of wells go by their own door; the answers come in the order of the readings. */
  async function sendLevels(records) {
    const list = records.map(({ sends: { type, photos, ...values } }) => (
      photos ? { ...values, photo: photos[0] } : values
    ));
    const { ok, said } = await post(underbund.addresses.levels, JSON.stringify(list), {
      "Content-Type": "application/json",
    });
    if (!ok) throw new Stopped("parcel-refused", said.detail);
    for (const [place, record] of records.entries()) {
      await write(record, said[place].result, said[place].findings);
    }
  }

  const write = (record, result, findings) =>
    store.put("records", {
      ...record, result, findings, answered: new Date().toISOString(),
      waits: !HAS_IT.includes(result) && result !== "refused",
    });

  async function device() {
    let known = await store.get("about", "device");
    if (!known) {
      known = { name: "device", value: `phone-${crypto.randomUUID().slice(0, 8)}` };
      await store.put("about", known);
    }
    return known.value;
  }

  const waiting = async () =>
    (await store.all("records")).filter((one) => one.waits).sort((a, b) => (a.made < b.made ? -1 : 1));

  /* One person at a time: what another person wrote down waits for that person to sign in. */
  async function sendAll() {
    const whole = await waiting();
    for (const by of new Set(whole.map((one) => one.by))) {
      const mine = whole.filter((one) => one.by === by);
      for (let at = 0; at < mine.length; at += PARCEL_MOST) {
        const ready = [];
        for (const record of mine.slice(at, at + PARCEL_MOST)) {
          const wrong = await sendPhotos(record);
          if (wrong.length) await write(record, "refused", wrong);
          else ready.push(record);
        }
        const levels = ready.filter((one) => one.sends.type === "level");
        const rest = ready.filter((one) => one.sends.type !== "level");
        if (rest.length) await sendParcel(rest);
        if (levels.length) await sendLevels(levels);
      }
    }
  }

  /* Two windows, or two calls of one, send one after the other. */
  async function now() {
    if (going) return going;
    const once = async () => {
      let stopped = null;
      try {
        await sendAll();
      } catch (error) {
        stopped = error instanceof Stopped ? error : new Stopped("office", String(error));
      }
      document.dispatchEvent(new CustomEvent("underbund:sent", { detail: stopped }));
      return stopped;
    };
    going = navigator.locks ? navigator.locks.request("underbund-sending", once) : once();
    try {
      return await going;
    } finally {
      going = null;
    }
  }

  const again = async (record) => {
    await store.put("records", { ...record, waits: true, result: "", findings: [] });
    return now();
  };

  window.addEventListener("online", now);
  setInterval(() => document.visibilityState === "visible" && now(), EVERY_MS);

  return { again, now, waiting };
})();
