/** Makes elements of the page. Text only ever enters as text nodes and attribute values, never as markup. */
type Attributes = Readonly<Record<string, string | number | boolean | undefined>>;
type Child = Node | string | undefined;

export function element<Name extends keyof HTMLElementTagNameMap>(
  name: Name,
  attributes: Attributes = {},
  ...children: Child[]
): HTMLElementTagNameMap[Name] {
  return furnish(document.createElement(name), attributes, children);
}

export function drawing<Name extends keyof SVGElementTagNameMap>(
  name: Name,
  attributes: Attributes = {},
  ...children: Child[]
): SVGElementTagNameMap[Name] {
  return furnish(document.createElementNS('http://www.w3.org/2000/svg', name), attributes, children);
}

/** A row of a table whose first cell heads it. */
export function tableRow(head: Child, ...cells: Child[]): HTMLTableRowElement {
  return element('tr', {}, element('th', { scope: 'row' }, head), ...cells.map((cell) => element('td', {}, cell)));
}

export function tableHead(...titles: Child[]): HTMLTableSectionElement {
  return element('thead', {}, element('tr', {}, ...titles.map((title) => element('th', { scope: 'col' }, title))));
}

function furnish<E extends Element>(made: E, attributes: Attributes, children: Child[]): E {
  for (const [name, value] of Object.entries(attributes)) {
    if (value === undefined || value === false) continue;
    made.setAttribute(name, value === true ? '' : String(value));
  }
  made.append(...children.filter((child) => child !== undefined));
  return made;
}
