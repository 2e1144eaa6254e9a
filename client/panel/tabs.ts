import { html } from './dom';

interface Tab<Id extends string> {
  readonly id: Id;
  readonly title: string;
  readonly element: HTMLElement;
}

/** Tabs as in the tab pattern of the ARIA practices: arrows move between them, and only one view is there at a time. */
export class Tabs<Id extends string> {
  readonly element: HTMLElement;
  readonly #tabs: readonly (Tab<Id> & { readonly button: HTMLButtonElement; readonly panel: HTMLElement })[];
  readonly #selected: (id: Id) => void;
  #id: Id;

  constructor(label: string, tabs: readonly Tab<Id>[], selected: (id: Id) => void) {
    this.#selected = selected;
    this.#id = tabs[0]!.id;
    this.#tabs = tabs.map((tab) => {
      const button = html(
        'button',
        { type: 'button', role: 'tab', id: `tab-${tab.id}`, 'aria-controls': `view-${tab.id}` },
        tab.title,
      );
      button.addEventListener('click', () => this.#go(tab.id));
      const panel = html(
        'div',
        { role: 'tabpanel', id: `view-${tab.id}`, 'aria-labelledby': `tab-${tab.id}` },
        tab.element,
      );
      return { ...tab, button, panel };
    });
    const list = html('div', { role: 'tablist', 'aria-label': label }, ...this.#tabs.map(({ button }) => button));
    list.addEventListener('keydown', (event) => this.#key(event));
    this.element = html('div', { class: 'tabs' }, list, ...this.#tabs.map(({ panel }) => panel));
    this.select(this.#id);
  }

  get selected(): Id {
    return this.#id;
  }

  /** Shows a view without telling of it. */
  select(id: Id): void {
    this.#id = id;
    for (const tab of this.#tabs) {
      const isSelected = tab.id === id;
      tab.button.setAttribute('aria-selected', String(isSelected));
      tab.button.tabIndex = isSelected ? 0 : -1;
      tab.panel.hidden = !isSelected;
    }
  }

  /** A view that has nothing to show cannot be chosen. */
  enable(id: Id, isEnabled: boolean): void {
    const tab = this.#tabs.find((other) => other.id === id);
    if (tab === undefined) return;
    tab.button.disabled = !isEnabled;
    if (!isEnabled && this.#id === id) this.select(this.#tabs[0]!.id);
  }

  #go(id: Id): void {
    this.select(id);
    this.#selected(id);
  }

  #key(event: KeyboardEvent): void {
    const open = this.#tabs.filter(({ button }) => !button.disabled);
    const at = open.findIndex(({ id }) => id === this.#id);
    const to = { ArrowRight: at + 1, ArrowLeft: at - 1, Home: 0, End: open.length - 1 }[event.key];
    if (to === undefined) return;
    event.preventDefault();
    const tab = open[(to + open.length) % open.length]!;
    this.#go(tab.id);
    tab.button.focus();
  }
}
