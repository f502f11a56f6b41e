/** A person with a keyboard: reaches everything by Tab, chooses by arrows, types. Never a pointer, never a script that sets a value. */

const REACH = 400; // so many Tabs reach any control of a form

export class Typist {
  constructor(page) {
    this.page = page;
  }

  /** Tab forward until the focus is on an element for which `test`, given its description, holds. */
  async reach(test, what) {
    for (let i = 0; i < REACH; i++) {
      const at = await this.focused();
      if (test(at)) return at;
      await this.page.keyboard.press("Tab");
    }
    throw new Error(`the keyboard does not reach ${what}`);
  }

  focused() {
    return this.page.evaluate(() => {
      const at = document.activeElement;
      return {
        id: at.id,
        tag: at.tagName,
        type: at.type,
        name: at.name,
        value: at.value,
        text: at.textContent.trim(),
        label: at.getAttribute("aria-label"),
        href: at.getAttribute("href"),
        class: at.className,
      };
    });
  }

  async field(pointer, part = "") {
    const id = `at${pointer}${part && `:${part}`}`;
    return this.reach((at) => at.id === id || (at.type === "radio" && at.name === id), id);
  }

  /** Fill in one field: `how` is text, or {spread, other} with text, or {pick}, or {option}. */
  async fill(pointer, how) {
    if (typeof how === "string") {
      await this.field(pointer);
      await this.page.keyboard.type(how);
    } else if (how.option !== undefined) await this.option(pointer, how.option);
    else if (how.pick !== undefined) await this.pick(pointer, "", how.pick);
    else if (how.add) {
      await this.field(pointer);
      await this.page.keyboard.press("Enter");
    } else if (how.open) {
      await this.reach((at) => at.tag === "SUMMARY" && at.text.startsWith(how.open), how.open);
      await this.page.keyboard.press("Enter");
    } else {
      await this.fill(pointer, how.text);
      await this.page.keyboard.press("Tab"); // the ± key
      await this.page.keyboard.press("Enter");
      await this.pick(pointer, "spread", how.spread);
      await this.field(pointer, "other");
      await this.page.keyboard.type(how.other);
    }
  }

  /** A radio: Space for the first one that is reached, arrows for the others. */
  async option(pointer, value) {
    await this.field(pointer);
    const values = await this.page.evaluate((name) => [...document.getElementsByName(name)].map((input) => input.value), `at${pointer}`);
    for (let i = 0; i <= values.length; i++) {
      const at = await this.focused();
      if (at.value === value) return this.page.keyboard.press("Space");
      await this.page.keyboard.press("ArrowDown");
    }
    throw new Error(`${pointer} has no option ${value}; it has ${values}`);
  }

  async pick(pointer, part, value) {
    await this.field(pointer, part);
    for (let i = 0; i < 80; i++) {
      if ((await this.focused()).value === value) return;
      await this.page.keyboard.press("ArrowDown");
    }
    throw new Error(`${pointer} has nothing called ${value} to pick`);
  }

  /** Press Enter on a link or button by its words. */
  async press(words) {
    await this.reach((at) => at.text.startsWith(words) || at.label === words, words);
    await this.page.keyboard.press("Enter");
  }
}
