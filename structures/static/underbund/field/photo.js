/* A photo made smaller on the phone: at most 1600 pixels a side, JPEG; drawing it anew leaves
   behind what the camera wrote into it. Time and place go beside it, place only where allowed. */
"use strict";

window.underbund = window.underbund || {};

underbund.photo = (() => {
  const MOST_PX = 1600, QUALITY = 0.8, PATIENCE_MS = 15000;

  async function shrink(file) {
    const picture = await createImageBitmap(file, { imageOrientation: "from-image" });
    const share = Math.min(1, MOST_PX / Math.max(picture.width, picture.height));
    const canvas = document.createElement("canvas");
    canvas.width = Math.max(1, Math.round(picture.width * share));
    canvas.height = Math.max(1, Math.round(picture.height * share));
    canvas.getContext("2d").drawImage(picture, 0, 0, canvas.width, canvas.height);
    picture.close();
    const made = await new Promise((resolve) => canvas.toBlob(resolve, "image/jpeg", QUALITY));
    if (!made) throw new Error("no picture");
    return made;
  }

  function place() {
    if (!navigator.geolocation) return Promise.resolve(null);
    return new Promise((resolve) => {
      navigator.geolocation.getCurrentPosition(
        ({ coords }) => resolve({ lat: coords.latitude, lon: coords.longitude, accuracy_m: coords.accuracy }),
        () => resolve(null),
        { enableHighAccuracy: true, timeout: PATIENCE_MS, maximumAge: 60000 },
      );
    });
  }

  /* Bytes, not a blob: some phones lose blobs of a database with their session. */
  async function take(file, { site, what, withPlace }) {
    const made = await shrink(file);
    const stamp = new Date(file.lastModified || Date.now()).toISOString();
    return {
      id: crypto.randomUUID(), site, what, taken_at: stamp, bytes: await made.arrayBuffer(),
      ...(withPlace ? await place() : null),
    };
  }

  return { take };
})();
