"use strict";
for (const table of document.querySelectorAll("table.sortable")) {
  const heads = Array.from(table.tHead.rows[0].cells);
  heads.forEach((head, column) => {
    const button = document.createElement("button");
    button.type = "button";
    button.textContent = head.textContent;
    head.textContent = "";
    head.append(button);
    button.addEventListener("click", () => {
      const down = head.getAttribute("aria-sort") === "ascending";
      for (const other of heads) other.removeAttribute("aria-sort");
      head.setAttribute("aria-sort", down ? "descending" : "ascending");
      const key = (row) => {
        const cell = row.cells[column];
        return cell.dataset.key === undefined ? cell.textContent.trim() : cell.dataset.key === "" ? NaN : Number(cell.dataset.key);
      };
      const rows = Array.from(table.tBodies[0].rows);
      rows.sort((a, b) => {
        const x = key(a), y = key(b);
        if (typeof x === "string") return (down ? -1 : 1) * x.localeCompare(y, "en", { numeric: true });
        if (Number.isNaN(x) || Number.isNaN(y)) return Number.isNaN(x) - Number.isNaN(y);
        return (down ? -1 : 1) * (x - y);
      });
      table.tBodies[0].append(...rows);
    });
  });
}
