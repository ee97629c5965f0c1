"use strict";
// Keeps a part of an edition as it is typed, or tries it, and shows what the server makes of it. Judges nothing itself.
(() => {
  const form = document.getElementById("editor");
  if (!form) return;
  const words = form.dataset;
  const keeps = "keeps" in words;
  const said = document.getElementById("saved");
  const trouble = document.getElementById("trouble");
  const shown = new Map();
  const PAUSE_MS = 500;
  const WAIT_MOST_MS = 30000;
  let timer = 0, failures = 0, sending = false, unsaved = false, stopped = false;

  const cookie = (name) => {
    const found = document.cookie.split("; ").find((part) => part.startsWith(`${name}=`));
    return found ? decodeURIComponent(found.slice(name.length + 1)) : "";
  };
  const say = (text) => { if (keeps && said && said.textContent !== text) said.textContent = text; };
  const later = (ms) => {
    clearTimeout(timer);
    timer = setTimeout(send, ms);
  };
  const post = (keepalive) => {
    const body = new URLSearchParams(new FormData(form));
    // The form's token is that of an earlier sign-in once somebody signed in again; the header carries today's.
    const token = cookie("csrftoken") || body.get("csrfmiddlewaretoken");
    body.delete("csrfmiddlewaretoken");
    return fetch(window.location.pathname, {
      method: "POST",
      headers: { Accept: "application/json", "X-CSRFToken": token },
      body,
      credentials: "same-origin",
      keepalive,
    });
  };

  function typed() {
    unsaved = true;
    say(words.unsaved);
    if (!stopped && !failures) later(PAUSE_MS);
  }

  async function send() {
    if (sending || stopped) return;
    sending = true;
    unsaved = false;
    say(words.saving);
    try {
      await answered(await post(false));
    } catch {
      failed(words.offline);
    }
    sending = false;
    if (unsaved && !failures && !stopped) later(PAUSE_MS);
  }

  async function answered(response) {
    const isJson = (response.headers.get("Content-Type") || "").startsWith("application/json");
    const signedOut = response.redirected || response.status === 403;
    if (!isJson) return failed(signedOut ? words.signedOut : `${words.offline} (${response.status})`, signedOut);
    const told = await response.json();
    if (response.status === 409) return keptElsewhere(told);
    failures = 0;
    if (trouble) trouble.hidden = true;
    if (told.revision) form.elements.seen.value = told.revision;
    if (told.refused) mend(told.refused);
    // What was typed since is newer than this answer, and its own answer is on its way.
    if (!unsaved) for (const [id, html] of Object.entries(told.parts || {})) show(id, html);
    if (!unsaved && told.saved_at) say(`${words.saved} ${told.saved_at}`);
  }

  function show(id, html) {
    const place = document.getElementById(id);
    if (!place || shown.get(id) === html) return;
    shown.set(id, html);
    if (id === "formula-samples") return showSamples(place, html);
    const focused = place.contains(document.activeElement) ? document.activeElement.id : "";
    place.innerHTML = html;
    if (focused) document.getElementById(focused)?.focus();
  }

  // The inputs stay as long as the formula has the same names; only what is wrong with a value is said anew.
  function showSamples(place, html) {
    const made = document.createElement("div");
    made.innerHTML = html;
    const names = (within) => within.querySelector("[data-names]")?.dataset.names;
    if (names(made) === "?") return;
    if (names(made) !== names(place)) {
      place.innerHTML = html;
      return;
    }
    for (const line of made.querySelectorAll("[data-sample]")) {
      const here = place.querySelector(`[data-sample="${CSS.escape(line.dataset.sample)}"]`);
      if (here) here.textContent = line.textContent;
    }
  }

  function failed(text, signedOut) {
    failures += 1;
    unsaved = true;
    say(words.unsaved);
    const link = document.createElement("a");
    link.href = window.location.pathname;
    link.target = "_blank";
    link.textContent = words.signIn;
    explain(text || words.offline, signedOut && words.signIn ? link : null);
    later(Math.min(WAIT_MOST_MS, 1000 * 2 ** Math.min(failures, 5)));
  }

  function explain(text, ...more) {
    if (!trouble) return;
    const line = document.createElement("p");
    line.textContent = text;
    trouble.replaceChildren(line, ...more.filter(Boolean));
    trouble.hidden = false;
  }

  function keptElsewhere(told) {
    stopped = true;
    unsaved = true;
    say(words.unsaved);
    const list = document.createElement("ul");
    for (const other of told.others || []) {
      const line = document.createElement("li");
      line.textContent = `${other.label}, ${words.here}: ${other.value || words.nothing}`;
      list.append(line);
    }
    const keep = button(words.keep, () => {
      form.elements.seen.value = told.revision;
      stopped = false;
      trouble.hidden = true;
      send();
    });
    const take = button(words.take, () => {
      unsaved = false;
      window.location.reload();
    });
    explain(told.says, list, keep, take);
  }

  function button(text, act) {
    const made = document.createElement("button");
    made.type = "button";
    made.className = "quiet";
    made.textContent = text;
    made.addEventListener("click", act);
    return made;
  }

  // What was put right is no longer said to be wrong; what went wrong meanwhile is said when it is saved.
  function mend(refused) {
    for (const line of form.querySelectorAll("[id^=refusal_]")) {
      const name = line.id.slice("refusal_".length);
      if (refused.includes(name)) continue;
      line.remove();
      document.getElementById(`id_${name}`)?.removeAttribute("aria-invalid");
    }
  }

  function leave() {
    if (!keeps || !unsaved || stopped) return;
    clearTimeout(timer);
    unsaved = false;
    post(true).catch(() => { unsaved = true; });
  }

  form.addEventListener("input", typed);
  form.addEventListener("submit", () => {
    form.elements.csrfmiddlewaretoken.value = cookie("csrftoken") || form.elements.csrfmiddlewaretoken.value;
    clearTimeout(timer);
    unsaved = false;
    stopped = true;
  });
  window.addEventListener("online", () => { if (unsaved) later(0); });
  window.addEventListener("focus", () => { if (unsaved && failures) later(0); });
  window.addEventListener("pagehide", leave);
  window.addEventListener("pageshow", (event) => { if (event.persisted) stopped = false; });
  window.addEventListener("beforeunload", (event) => { if (keeps && unsaved && (failures || stopped)) event.preventDefault(); });
})();
