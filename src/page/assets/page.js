// Tables: sorting by column, filtering of seams.
"use strict";
for (const table of document.querySelectorAll("table.sortable")) {
  const heads = [...table.tHead.rows[0].cells];
  const body = table.tBodies[0];
  heads.forEach((head, column) => {
    head.querySelector("button").addEventListener("click", () => {
      const down = head.getAttribute("aria-sort") === "ascending";
      for (const other of heads) other.removeAttribute("aria-sort");
      head.setAttribute("aria-sort", down ? "descending" : "ascending");
      const key = (row) => {
        const cell = row.cells[column];
        return cell.dataset.value === undefined ? cell.textContent : Number(cell.dataset.value);
      };
      const rows = [...body.rows].map((row) => [key(row), row]);
      const order = (a, b) => (typeof a === "number" ? a - b : a.localeCompare(b, "en", { numeric: true }));
      rows.sort((a, b) => (down ? order(b[0], a[0]) : order(a[0], b[0])));
      body.append(...rows.map((pair) => pair[1]));
    });
  });
}
{
  const rows = [...document.querySelector("#seams-table").tBodies[0].rows];
  const words = document.querySelector("#words");
  const verdicts = document.querySelector("#verdicts");
  const texts = new Map(rows.map((row) => [row, row.textContent.toLowerCase()]));
  const filter = () => {
    const wanted = words.value.toLowerCase().split(/\s+/).filter(Boolean);
    let shown = 0;
    for (const row of rows) {
      const fits = (verdicts.value === "" || row.className === verdicts.value)
        && wanted.every((word) => texts.get(row).includes(word));
      row.hidden = !fits;
      shown += fits ? 1 : 0;
    }
    document.querySelector("#count").textContent = `${shown} of ${rows.length} seams`;
  };
  const form = document.querySelector("#filter");
  form.hidden = false;
  form.addEventListener("input", filter);
  filter();
}
