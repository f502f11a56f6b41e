/** Looks for what would stand in a person's way in a view: axe-core's rules, what is wider than the screen, what is too small for a glove. */
import fs from "node:fs";
import path from "node:path";

const AXE = fs.readFileSync(new URL("./tools/node_modules/axe-core/axe.min.js", import.meta.url), "utf8");
const LEAST_TARGET = 48;

export class Barriers {
  constructor(page, found, pictures) {
    Object.assign(this, { page, found, pictures });
  }

  /** Note the barriers of the view as it is now, and take its picture if pictures are wanted. */
  async look(view) {
    if (!(await this.page.evaluate(() => "axe" in globalThis))) await this.page.evaluate(AXE);
    const axe = await this.page.evaluate(async () => {
      const { violations } = await globalThis.axe.run(document, {
        preload: false,
        runOnly: ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa", "best-practice"],
      });
      return violations.map(
        ({ id, nodes }) =>
          `${id}: ${nodes
            .slice(0, 3)
            .map(({ html, failureSummary }) => `${html.slice(0, 160)} ${failureSummary.slice(0, 200)}`)
            .join(" | ")}`,
      );
    });
    const geometry = await this.page.evaluate((least) => {
      const shown = (element) => element.checkVisibility() && !element.closest(".skip");
      const small = [...document.querySelectorAll("a[href], button, input, select, summary")]
        .filter(shown)
        .map((element) => ({ element, box: element.getBoundingClientRect() }))
        .filter(({ box }) => box.width < least - 0.01 || box.height < least - 0.01);
      return {
        small: small.map(({ element, box }) => `${element.outerHTML.slice(0, 120)}: ${box.width} x ${box.height}`),
        wide: document.documentElement.scrollWidth - innerWidth,
      };
    }, LEAST_TARGET);
    this.found.push({ view, axe, ...geometry });
    if (this.pictures) await this.page.screenshot({ path: path.join(this.pictures, `${view}.png`), fullPage: true });
  }

  /** Open everything that is folded. */
  openAll() {
    return this.page.evaluate(() => document.querySelectorAll("main details").forEach((details) => (details.open = true)));
  }
}
