/** node policy_chromium.js CHROMIUM RUNTIME: what the browser scripts' policy refuses, as JSON. */
import { dirname } from "node:path";
import { reported } from "./browser.js";

const [browserPath, runtimePath] = process.argv.slice(2);
console.log(JSON.stringify(await reported(browserPath, dirname(runtimePath), "policy_page.js")));
