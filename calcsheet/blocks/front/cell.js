// Used by table.js; widgets.py puts this text before it.

/** One editable cell. `served` is Python's text, `shown` the text last put into the input by us. */
class Cell {
  constructor(row, column, onCommit) {
    Object.assign(this, { row, key: column.key, served: "", shown: "", error: "", note: "", state: "kept" });
    this.input = make("input", "calcsheet-input", { type: "text", size: "1", autocomplete: "off", spellcheck: "false" });
    this.input.cell = this;
    this.message = make("li", "", { id: `calcsheet-${fresh()}` });
    this.onCommit = onCommit;
  }

  get typed() {
    return this.input.value !== this.shown;
  }

  serve(text, error, label) {
    this.served = text;
    this.error = error;
    this.label = label;
    this.input.setAttribute("aria-label", label);
    if (this.state === "kept" && !this.typed) this.show();
    else if (this.state !== "sent" && this.input.value === text) this.restore();
    this.mark();
  }

  show() {
    if (this.input.value !== this.served) {
      const { selectionStart, selectionEnd, selectionDirection } = this.input;
      this.input.value = this.served;
      if (document.activeElement === this.input) {
        this.input.setSelectionRange(selectionStart, selectionEnd, selectionDirection);
      }
    }
    this.shown = this.served;
  }

  restore() {
    this.state = "kept";
    this.note = "";
    this.show();
    this.mark();
  }

  commit() {
    if (this.state === "sent" && this.input.value === this.sent) return;
    if (this.input.value === this.served && this.state !== "sent") this.restore();
    else if (this.typed || this.state !== "kept") this.onCommit(this);
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
    setText(this.message, text);
    this.input.parentElement.dataset.state = this.state;
    if (text) {
      this.input.setAttribute("aria-invalid", "true");
      this.input.setAttribute("aria-describedby", this.message.id);
    } else {
      this.input.removeAttribute("aria-invalid");
      this.input.removeAttribute("aria-describedby");
    }
  }
}
