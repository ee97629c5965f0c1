"use strict";
// Keeps what is typed as a draft on the server and shows what the server makes of it. Judges nothing itself.
(() => {
  const form = document.getElementById("entry-form");
  if (!form) return;
  const said = document.getElementById("saved");
  const trouble = document.getElementById("trouble");
  const words = form.dataset;
  const pageName = crypto.getRandomValues(new Uint32Array(2)).join("-");
  const shown = new Map();
  const PAUSE_MS = 700;
  const MOST_MS = 4000;
  const WAIT_MOST_MS = 30000;
  let turn = 0, timer = 0, firstUnsaved = 0, failures = 0;
  let sending = false, unsaved = false, stopped = false;

  const hidden = (name) => {
    const input = document.createElement("input");
    input.type = "hidden";
    input.name = name;
    form.append(input);
    return input;
  };
  const pageInput = hidden("page");
  const turnInput = hidden("turn");
  pageInput.value = pageName;

  const cookie = (name) => {
    const found = document.cookie.split("; ").find((part) => part.startsWith(`${name}=`));
    return found ? decodeURIComponent(found.slice(name.length + 1)) : "";
  };
  const say = (text) => { if (said.textContent !== text) said.textContent = text; };

  const freshBody = () => {
    turn += 1;
    turnInput.value = String(turn);
    const body = new URLSearchParams(new FormData(form));
    // The form's token is that of an earlier sign-in once somebody signed in again; the header carries today's.
    body.delete("csrfmiddlewaretoken");
    return body;
  };
  const post = (keepalive) => fetch(form.action, {
    method: "POST",
    headers: { Accept: "application/json", "X-CSRFToken": cookie("csrftoken") },
    body: freshBody(),
    credentials: "same-origin",
    keepalive,
  });

  const later = (ms) => {
    clearTimeout(timer);
    timer = setTimeout(send, ms);
  };
  const typed = () => {
    if (!unsaved) firstUnsaved = Date.now();
    unsaved = true;
    say(words.unsaved);
    if (stopped || failures) return;
    later(Math.max(0, Math.min(PAUSE_MS, MOST_MS - (Date.now() - firstUnsaved))));
  };

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
    const told = isJson ? await response.json() : {};
    if (response.ok && isJson) return kept(told);
    if (response.status === 401) return failed(words.signedOut, told.sign_in);
    if (response.status === 409 && told.others) return keptElsewhere(told);
    if (told.says) {
      stopped = true;
      unsaved = true;
      say(words.unsaved);
      return explain(told.says);
    }
    return failed(`${words.unsaved} (${response.status})`);
  }

  function kept(told) {
    failures = 0;
    trouble.hidden = true;
    form.elements.revision.value = told.revision;
    form.elements.csrfmiddlewaretoken.value = cookie("csrftoken") || form.elements.csrfmiddlewaretoken.value;
    for (const [key, item] of Object.entries(told.items)) show(key, item);
    if (!unsaved) say(`${words.saved} ${told.saved_at}`);
  }

  function show(key, item) {
    const place = document.getElementById(`out-${key}`);
    if (!place || shown.get(key) === item.html) return;
    shown.set(key, item.html);
    const focused = place.contains(document.activeElement) ? document.activeElement.id : "";
    place.innerHTML = item.html;
    if (focused) document.getElementById(focused)?.focus();
    const input = document.getElementById(`id_${key}`);
    if (!input) return;
    if (item.refused) input.setAttribute("aria-invalid", "true");
    else input.removeAttribute("aria-invalid");
  }

  function failed(text, signIn) {
    failures += 1;
    unsaved = true;
    say(words.unsaved);
    explain(text, signIn ? link(signIn) : null);
    later(Math.min(WAIT_MOST_MS, 1000 * 2 ** Math.min(failures, 5)));
  }

  function link(address) {
    const anchor = document.createElement("a");
    anchor.href = address;
    anchor.target = "_blank";
    anchor.textContent = words.signIn;
    return anchor;
  }

  function explain(text, ...more) {
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
    for (const [name, value] of Object.entries(told.others)) {
      const line = document.createElement("li");
      line.textContent = `${labelOf(name)}, ${words.here}: ${value || words.nothing}`;
      list.append(line);
    }
    const keep = button(words.keep, () => {
      form.elements.revision.value = told.revision;
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

  function labelOf(name) {
    const input = form.elements[name];
    const first = input instanceof RadioNodeList ? input[0] : input;
    const label = first?.closest("fieldset.item")?.querySelector("legend") || first?.labels?.[0];
    return (label ? label.textContent : name).trim();
  }

  function button(text, act) {
    const made = document.createElement("button");
    made.type = "button";
    made.className = "quiet";
    made.textContent = text;
    made.addEventListener("click", act);
    return made;
  }

  function leave() {
    if (!unsaved || stopped) return;
    clearTimeout(timer);
    unsaved = false;
    post(true).catch(() => { unsaved = true; });
  }

  function moveOn(event) {
    const at = event.target;
    if (event.key !== "Enter" || event.isComposing || !at.matches("input[type=text], input[type=radio], input[type=datetime-local]")) return;
    event.preventDefault();
    const stops = [...form.querySelectorAll("input:not([type=hidden]), select, textarea, button")]
      .filter((each) => each.offsetParent !== null && !(each.type === "radio" && each.name === at.name && each !== at));
    stops[stops.indexOf(at) + 1]?.focus();
  }

  form.addEventListener("input", typed);
  form.addEventListener("change", (event) => {
    if (event.target.matches("[data-judges]")) form.querySelector("button[value=judge]").click();
    else typed();
  });
  form.addEventListener("focusout", () => { if (unsaved && !failures) later(0); });
  form.addEventListener("keydown", moveOn);
  form.addEventListener("submit", () => {
    freshBody();
    form.elements.csrfmiddlewaretoken.value = cookie("csrftoken") || form.elements.csrfmiddlewaretoken.value;
    clearTimeout(timer);
    unsaved = false;
    stopped = true;
  });
  window.addEventListener("online", () => { if (unsaved) later(0); });
  window.addEventListener("focus", () => { if (unsaved && failures) later(0); });
  window.addEventListener("pagehide", leave);
  window.addEventListener("pageshow", (event) => { if (event.persisted) stopped = false; });
  document.addEventListener("visibilitychange", () => { if (document.visibilityState === "hidden") leave(); });
  window.addEventListener("beforeunload", (event) => { if (unsaved && failures) event.preventDefault(); });
})();
