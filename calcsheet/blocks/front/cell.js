// Used by table.js; widgets.py puts this text before it.

/**
 * One cell. `served` is Python's text, `shown` the text last put into the input by us. While it has the focus its `mode`
 * is "ready" (a key replaces the text, arrows walk), "enter" (something was typed) or "edit" (arrows move the caret).
 */
class Cell {
  constructor(row, place, column, hooks) {
    Object.assign(this, { row, place, key: column.key, editable: column.editable, hooks });
    Object.assign(this, { served: "", shown: "", error: "", note: "", text: "", state: "kept", mode: "" });
    this.td = make(place === 0 ? "th" : "td", `calcsheet-${column.align ?? "right"}`);
    if (place === 0) this.td.scope = "row";
    this.input = make("input", "calcsheet-input", { type: "text", size: "1", tabindex: "-1", autocomplete: "off", spellcheck: "false" });
    this.input.readOnly = !column.editable;
    this.input.cell = this;
    this.td.append(this.input);
  }

  get typed() {
    return this.input.value !== this.shown;
  }

  serve(text, error, label) {
    if (this.state === "kept" && text === this.served && error === this.error && label === this.label) return;
    if (label !== this.label) this.input.setAttribute("aria-label", label);
    Object.assign(this, { served: text, error, label });
    if (this.state === "kept" && !this.typed) this.show();
    else if (this.state !== "sent" && this.input.value === text) this.restore();
    this.mark();
  }

  show() {
    if (this.input.value !== this.served) {
      const { selectionStart, selectionEnd, selectionDirection } = this.input;
      this.input.value = this.served;
      if (this.mode === "ready") this.input.select();
      else if (this.mode) this.input.setSelectionRange(selectionStart, selectionEnd, selectionDirection);
    }
    this.shown = this.input.value; // an input drops line endings
  }

  enter(mode) {
    this.mode = mode;
    if (mode) this.input.dataset.mode = mode;
    else delete this.input.dataset.mode;
    if (mode === "ready") this.input.select();
    else if (mode === "edit") this.input.setSelectionRange(this.input.value.length, this.input.value.length);
  }

  restore() {
    this.state = "kept";
    this.note = "";
    this.show();
    this.mark();
  }

  commit() {
    if (!this.editable || (this.state === "sent" && this.input.value === this.sent)) return;
    if (this.input.value === this.shown && this.state !== "sent") {
      if (this.state !== "kept") this.restore();
    } else this.hooks.commit(this);
  }

  /** Returns what `settle` needs to tell the answer to this text from the answer to an earlier one. */
  wait() {
    this.state = "sent";
    this.sent = this.input.value;
    this.note = "";
    this.mark();
    return (this.round = {});
  }

  settle(round, { ok, lost, message }) {
    if (round !== this.round) return;
    if (this.input.value !== this.sent) this.state = "kept"; // typed on since: the newer text is still to be committed
    else if (ok) return this.restore();
    else this.state = lost ? "unsaved" : "refused";
    this.note = ok ? "" : lost ? `${this.label}: "${this.sent}" is not saved` : message;
    this.mark();
  }

  mark() {
    const text = this.note || (this.state === "kept" ? this.error : "");
    if (this.td.dataset.state !== this.state) this.td.dataset.state = this.state;
    if (text !== this.text) {
      this.message ??= make("li", "", { id: `calcsheet-${fresh()}` });
      this.message.textContent = this.text = text;
      if (text) {
        this.input.setAttribute("aria-invalid", "true");
        this.input.setAttribute("aria-describedby", this.message.id);
      } else {
        this.input.removeAttribute("aria-invalid");
        this.input.removeAttribute("aria-describedby");
      }
    }
    this.hooks.marked(this);
  }
}
