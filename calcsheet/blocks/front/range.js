// Used by table.js; widgets.py puts this text before it.

/**
 * The range of cells that edits apply to: from the cell with the focus to the farthest one, by row id and column. `grid`
 * has `order` (the ids of the rows, roof first), `columns` and `cellAt(row index, column index)`.
 */
class Range {
  constructor(grid) {
    this.grid = grid;
    this.from = { row: "", place: 0, index: 0 };
    this.to = { ...this.from };
    this.painted = [];
  }

  get box() {
    const [a, b] = [this.indexOf(this.from), this.indexOf(this.to)];
    const [c, d] = [this.from.place, this.to.place];
    return { top: Math.min(a, b), bottom: Math.max(a, b), left: Math.min(c, d), right: Math.max(c, d) };
  }

  get single() {
    return this.from.row === this.to.row && this.from.place === this.to.place;
  }

  /** Index of an end's row; where the row is gone, the one that has taken its place. */
  indexOf(end) {
    const { order } = this.grid;
    if (order[end.index] !== end.row) {
      const found = order.indexOf(end.row);
      end.index = found < 0 ? Math.max(0, Math.min(end.index, order.length - 1)) : found;
      end.row = order[end.index] ?? "";
    }
    return end.index;
  }

  start(index, place) {
    this.from = { row: this.grid.order[index], place, index };
    this.to = { ...this.from };
    this.paint();
  }

  reach(index, place) {
    this.to = { row: this.grid.order[index], place, index };
    this.paint();
  }

  starts(cell) {
    return this.from.row === cell.row && this.from.place === cell.place;
  }

  /** All cells; the focus stays where it is. */
  all() {
    this.from = { row: this.grid.order[0], place: 0, index: 0 };
    this.reach(this.grid.order.length - 1, this.grid.columns.length - 1);
  }

  /** Rows, first to last, and the keys of the columns that can be typed into, as the messages to Python name them. */
  get asked() {
    const { top, bottom, left, right } = this.box;
    const keys = this.grid.columns.slice(left, right + 1).filter((column) => column.editable).map((column) => column.key);
    return { row: this.grid.order[top], last: this.grid.order[bottom], keys };
  }

  /** The same to be filled down: a single row takes from the one above it. */
  get filled() {
    const { top, bottom } = this.box;
    const { asked } = this;
    return top === bottom && top > 0 ? { ...asked, row: this.grid.order[top - 1] } : asked;
  }

  cells() {
    const { top, bottom, left, right } = this.box;
    const found = [];
    for (let index = top; index <= bottom; index++) {
      for (let place = left; place <= right; place++) {
        const cell = this.grid.cellAt(index, place);
        if (cell) found.push(cell);
      }
    }
    return found;
  }

  paint() {
    const now = this.single ? [] : this.cells();
    const kept = new Set(now);
    for (const cell of this.painted) if (!kept.has(cell)) cell.td.removeAttribute("aria-selected");
    for (const cell of now) cell.td.setAttribute("aria-selected", "true");
    this.painted = now;
  }

  /** The range as spreadsheets read it: tabs between cells, a cell with a tab, a line ending or a mark in marks. */
  get copied() {
    const { top, bottom, left, right } = this.box;
    const lines = [];
    for (let index = top; index <= bottom; index++) {
      const texts = [];
      for (let place = left; place <= right; place++) {
        const text = (this.grid.cellAt(index, place)?.served ?? "").replaceAll("\u202f", "").replaceAll("\u2212", "-");
        texts.push(/["\t\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);
      }
      lines.push(texts.join("\t"));
    }
    return lines.join("\r\n");
  }
}
