// Links stay true links: they open in a new tab, and work without this script. A plain press moves the browser's own
// history, as its back button does, and the app follows: several times faster than a reload, and "back" still leads
// back to where the reader was. Inside a picture of tiles one tile can be tabbed to, and the arrows move.
const near = (from, key, tiles) => {
  const at = tiles.indexOf(from), here = from.getBoundingClientRect();
  if (key === 'ArrowRight') return tiles[at + 1];
  if (key === 'ArrowLeft') return tiles[at - 1];
  const down = key === 'ArrowDown' ? 1 : -1;
  let best, least = Infinity;
  for (const tile of tiles) {
    const there = tile.getBoundingClientRect(), away = (there.top - here.top) * down;
    if (away < 2) continue;
    const far = away * 3 + Math.abs(there.left - here.left);
    if (far < least) { least = far; best = tile; }
  }
  return best;
};
export default function({ data, parentElement }) {
  let root = parentElement.querySelector(':scope > .linked');
  if (!root) {
    root = document.createElement('div');
    root.className = 'linked';
    parentElement.appendChild(root);
  }
  if (root.shown !== data.html) {
    root.innerHTML = data.html;
    root.shown = data.html;
    root.querySelectorAll('a.tile').forEach((tile, at) => { tile.tabIndex = at === 0 ? 0 : -1; });
  }
  root.onclick = (event) => {
    const link = event.target.closest('a[href^="/"]');
    if (!link || event.ctrlKey || event.metaKey || event.shiftKey || event.button !== 0) return;
    event.preventDefault();
    history.pushState({}, '', link.getAttribute('href'));
    window.dispatchEvent(new PopStateEvent('popstate', { state: {} }));
    document.querySelector('[data-testid="stMain"]')?.scrollTo(0, 0);
  };
  root.onkeydown = (event) => {
    if (!event.key.startsWith('Arrow') || !event.target.matches('a.tile')) return;
    const next = near(event.target, event.key, [...root.querySelectorAll('a.tile')]);
    if (!next) return;
    event.preventDefault();
    event.target.tabIndex = -1;
    next.tabIndex = 0;
    next.focus();
  };
}
