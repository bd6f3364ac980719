// Writing the choices through the server would add a step to the browser's history for each tap. `top` names what is
// new on the page: it is shown from its beginning, wherever the reader had scrolled to.
export default function({ data }) {
  if (location.pathname !== data.page) return;
  if (location.pathname + location.search !== data.address) history.replaceState(history.state, '', data.address);
  if (data.top && window.wearbookTop !== data.top) {
    window.wearbookTop = data.top;
    document.querySelector('[data-testid="stMain"]')?.scrollTo(0, 0);
  }
}
