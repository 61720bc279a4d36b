// The chosen sender's figures, and the list to choose one from. All text from logs goes in by textContent.
logtoolMap.panel = (() => {
  const { choice } = logtoolMap;
  const LISTED = 200;

  function make(tag, text, attributes = {}) {
    const element = document.createElement(tag);
    if (text !== undefined && text !== null) element.textContent = text;
    for (const [name, value] of Object.entries(attributes)) element.setAttribute(name, value);
    return element;
  }

  const number = (value, digits = 0) => value.toLocaleString("en", { maximumFractionDigits: digits }).replaceAll(",", "\u202f");
  const many = (count, one, more) => `${number(count)} ${count === 1 ? one : more}`;

  // A distance no larger than what the locators leave open is only said to be below that.
  function distance({ km, uncertainty }) {
    if (km === null) return "not known";
    return km < uncertainty ? `< ${number(uncertainty)} km` : `${number(km)} \u00b1 ${number(uncertainty)} km`;
  }

  const when = (text) => text.replace("T", " ").replace("Z", " UTC");

  function figures(rows) {
    const list = make("dl");
    for (const [name, value] of rows) list.append(make("dt", name), make("dd", value));
    return list;
  }

  function locator(sender) {
    if (!sender.locator) return "none given";
    return `${sender.locator} (${sender.borrowed ? "borrowed from another hour" : "its own"})`;
  }

  const groupName = (page, group) => [choice.text(group.antenna), group.band, group.mode]
    .filter((part) => part !== null).join(", ");

  const antennaFigures = (page, total) => [
    `Antenna ${groupName(page, page.model.groups[total.group])}`,
    `${many(total.receptions, "reception", "receptions")}, SNR median ${total.snr === null ? "not known" : `${number(total.snr, 1)} dB`}`,
  ];

  function pairPart(page, pair) {
    const part = make("div"), { model } = page;
    const totals = model.senders[pair.sender].totals.filter((total) => model.groups[total.group].receiver === pair.receiver);
    part.append(make("h3", `At ${model.receivers[pair.receiver].name}`));
    part.append(figures([
      ...(pair.locator ? [["Locator heard here", pair.locator]] : []),
      ["Distance", distance(pair)],
      ["Bearing", pair.bearing === null ? "not known" : `${number(pair.bearing)}\u00b0`],
      ["Receptions", number(totals.reduce((sum, total) => sum + total.receptions, 0))],
      ...totals.map((total) => antennaFigures(page, total)),
      ["First", when(pair.first)],
      ["Last", when(pair.last)],
      ["Heard", pair.again ? "again within a day" : "once"],
    ]));
    if (!pair.lines.length) return part;
    part.append(make("p", pair.lines.length === 1 ? "A line behind this" : `${pair.lines.length} lines behind this`));
    const list = make("ul", null, { class: "lines" });
    for (const { file, line, time: at } of pair.lines) list.append(make("li", `${file}, line ${line}, ${when(at)}`));
    part.append(list);
    return part;
  }

  // Fill the panel; `others` are the senders whose circles lie under the same point.
  function show(page, others) {
    const panel = document.getElementById("sender");
    panel.replaceChildren();
    if (!page.selected) {
      const lines = page.model.files.length ? " and the lines behind them" : "";
      panel.append(make("p", `Choose a circle on the map or a name in the list to see its figures${lines}.`));
      return;
    }
    const { sender } = page.selected;
    const head = make("div", null, { class: "head" }), close = make("button", "Close", { type: "button", id: "sender-close" });
    close.addEventListener("click", () => page.select(null));
    head.append(make("h2", sender.name), close);
    panel.append(head);
    const here = page.heard.find((one) => one.sender === sender);
    panel.append(figures([
      ["Locator", locator(sender)],
      ["In what is drawn", here ? many(here.receptions, "reception", "receptions") : "not heard"],
    ]));
    for (const pair of sender.pairs) panel.append(pairPart(page, pair));
    const rest = others.filter((one) => one.sender !== sender);
    if (!rest.length) return;
    panel.append(make("h3", `${many(rest.length, "other sender", "other senders")} under the same point`));
    const box = make("div", null, { class: "others" });
    for (const one of rest.slice(0, LISTED)) {
      const button = make("button", one.sender.name, { type: "button" });
      button.addEventListener("click", () => page.select(one.sender, others));
      box.append(button);
    }
    panel.append(box);
  }

  const ORDERS = {
    receptions: (p, q) => q.receptions - p.receptions,
    km: (p, q) => (q.km === null ? -1 : q.km) - (p.km === null ? -1 : p.km),
    name: (p, q) => (p.sender.name < q.sender.name ? -1 : p.sender.name > q.sender.name ? 1 : 0),
  };

  // The senders drawn that have the searched text in their name or locator.
  function list(page) {
    const wanted = document.getElementById("search").value.trim().toUpperCase();
    const found = page.heard
      .filter(({ sender }) => sender.name.toUpperCase().includes(wanted) || (sender.locator || "").toUpperCase().startsWith(wanted))
      .sort(ORDERS[document.getElementById("order").value]);
    const more = found.length > LISTED ? `, the first ${LISTED} listed` : "";
    document.getElementById("list-text").textContent = `${many(found.length, "sender", "senders")}${more}: name, distance, receptions`;
    const rows = found.slice(0, LISTED).map((one) => {
      const row = make("li"), button = make("button", null, { type: "button" });
      const nearest = one.pairs.find((pair) => pair.km === one.km);
      const far = one.km === null ? "no locator" : one.km < nearest.uncertainty ? `< ${number(nearest.uncertainty)} km` : `${number(one.km)} km`;
      button.append(make("span", one.sender.name), make("span", far), make("span", number(one.receptions)));
      button.setAttribute("aria-current", String(Boolean(page.selected) && page.selected.sender === one.sender));
      button.addEventListener("click", () => page.select(one.sender, [], true));
      row.append(button);
      return row;
    });
    document.getElementById("list").replaceChildren(...rows);
  }

  // Typing narrows the list, arrow keys walk through it, Enter in the search chooses the first.
  function search(page) {
    document.getElementById("search").addEventListener("input", () => list(page));
    document.getElementById("order").addEventListener("change", () => list(page));
    const buttons = () => [...document.querySelectorAll("#list button")];
    document.getElementById("search").addEventListener("keydown", (event) => {
      const first = buttons()[0];
      if (!first) return;
      if (event.key === "Enter") first.click();
      if (event.key === "ArrowDown") {
        event.preventDefault();
        first.focus();
      }
    });
    document.getElementById("list").addEventListener("keydown", (event) => {
      const all = buttons(), at = all.indexOf(document.activeElement);
      const to = { ArrowDown: at + 1, ArrowUp: at - 1, Home: 0, End: all.length - 1 }[event.key];
      if (to === undefined) return;
      event.preventDefault();
      (to < 0 ? document.getElementById("search") : all[Math.min(to, all.length - 1)]).focus();
    });
  }

  function read(page) {
    const { notes, ledger, options, receivers } = page.model;
    const box = document.getElementById("read");
    const part = (name, texts) => {
      if (!texts.length) return;
      const items = make("ul");
      for (const text of texts) items.append(make("li", text));
      box.append(make("h3", name), items);
    };
    part("Receivers", receivers.map(({ name, locator: place }) => `${name} at ${place}`));
    part("Notes", notes);
    part("Lines", ledger);
    part("Options", options.map(([name, value]) => `${name}: ${value}`));
  }

  return { make, number, many, show, list, search, read };
})();
