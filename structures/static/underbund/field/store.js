/* What waits on this phone: records, their photos, half-filled forms. One database, four drawers.
   Nothing leaves it before the office has said that it has it. */
"use strict";

window.underbund = window.underbund || {};

underbund.store = (() => {
  const NAME = "underbund-field", VERSION = 1;
  let opened = null;

  function open() {
    opened = opened || new Promise((resolve, reject) => {
      const asked = indexedDB.open(NAME, VERSION);
      asked.onupgradeneeded = () => {
        const base = asked.result;
        base.createObjectStore("records", { keyPath: "id" });
        base.createObjectStore("photos", { keyPath: "id" });
        base.createObjectStore("drafts", { keyPath: "page" });
        base.createObjectStore("about", { keyPath: "name" });
      };
      asked.onsuccess = () => resolve(asked.result);
      asked.onerror = () => reject(asked.error);
    });
    return opened;
  }

  /* Resolves only when the transaction is through: what is then lost is lost with the disk. */
  async function work(drawers, mode, act) {
    const base = await open();
    return new Promise((resolve, reject) => {
      const done = base.transaction(drawers, mode, { durability: "strict" });
      const result = act(...drawers.map((name) => done.objectStore(name)));
      done.oncomplete = () => resolve(result && "result" in result ? result.result : undefined);
      done.onerror = () => reject(done.error);
      done.onabort = () => reject(done.error);
    });
  }

  const get = (drawer, key) => work([drawer], "readonly", (one) => one.get(key));
  const all = (drawer) => work([drawer], "readonly", (one) => one.getAll());
  const put = (drawer, value) => work([drawer], "readwrite", (one) => one.put(value));
  const drop = (drawer, key) => work([drawer], "readwrite", (one) => one.delete(key));

  /* A record with its photos and without its draft: all of it, or nothing. */
  const keep = (record, photos, page) =>
    work(["records", "photos", "drafts"], "readwrite", (records, pictures, drafts) => {
      records.put(record);
      photos.forEach((one) => pictures.put(one));
      drafts.delete(page);
    });

  const forget = (record) =>
    work(["records", "photos"], "readwrite", (records, pictures) => {
      records.delete(record.id);
      (record.sends.photos || []).forEach((id) => pictures.delete(id));
    });

  return { all, drop, forget, get, keep, put };
})();
