/** From the engine's numbers to the answer a person reads and a machine stores. */
import { layout } from "./layout.js";
import { isWeak } from "./model.js";
import { template } from "./phrase.js";
import { reader } from "./reported.js";

const WORDS = ["danger", "warning", "caution", "notice"];      // ANSI Z535.4: most severe first

/** Writes the answers of one check of one rule set: write(intake, plan, results, intervals, beyond, inputDigest, language). */
export function answerWriter({ data, version, digest }, model) {
  const { units, texts, cautions } = data, { findings, declared, slots } = model, look = { model, units, texts };
  const sentences = findings.map(({ sentence }) => Object.fromEntries(Object.entries(sentence).map(([language, text]) => [language, template(text)])));

  /** [number of the deciding finding, the later ones that are reported beside it]: a note never decides, a mild finding is reported only where it decides. */
  function decide(live, results) {
    let decided = null;
    const beside = [];
    for (const [number, place] of live) {
      const { verdict } = findings[number];
      if (place !== true && !results[place]) continue;
      if (verdict !== "note" && decided === null) decided = number;
      else if (verdict !== "acceptable" && verdict !== "undetermined") beside.push(number);
    }
    return [decided, ...beside];
  }

  const engineFinding = (code, verdict, language, names) => ({ code, verdict, sentence: texts[code][language].replaceAll("{names}", () => names.join(", ")) });

  /** Unverified numbers on which an acceptable verdict rests, by name, with source and standing. */
  function weak(plan, { origins, assumed }, decided) {
    const { fixed, slots: read } = plan.basis(decided), found = new Map(fixed);
    for (const index of read) {
      const origin = origins.get(index), { path, field } = slots[index], isAssumed = assumed.some((place) => (Array.isArray(place) ? place[0] : place) === index);
      for (const record of origin ? [origin].flat() : isAssumed ? [field.assume] : []) {
        if (record && isWeak(model, record) && !found.has(path)) found.set(path, record);
      }
    }
    return [...found].map(([name, { source, standing }]) => ({ name, source, standing }));
  }

  const held = (places, results) => [...places.keys()].filter((n) => places[n] === true || (places[n] !== false && results[places[n]]));

  function assumptions(plan, results, { assumed }, language) {
    const stated = held(plan.assumptions, results).map((n) => ({ because: declared.assumptions[n].text[language] }));
    return [...assumed.map((place) => {
      const [index, item] = [place].flat(), { field, pointer } = slots[index], { value, because } = field.assume;
      return { input: item === undefined ? pointer : pointer.replace("*", item), value, unit: field.unit ?? null, because: because[language] };
    }), ...stated];
  }

  function cautionList(plan, results, holding, language) {
    const standing = held(plan.cautions, results).map((n) => declared.cautions[n].caution);
    const ids = [...new Set([...holding.flatMap((n) => findings[n].cautions ?? []), ...standing])];
    return ids.map((id) => ({ id, word: cautions[id].word, text: cautions[id].text[language] })).sort((a, b) => WORDS.indexOf(a.word) - WORDS.indexOf(b.word));
  }

  return (intake, plan, results, intervals, beyond, inputDigest, language) => {
    const view = reader(look, intake, plan, results, intervals, language), holding = decide(plan.live, results), [decided] = holding;
    const reported = holding.map((n) => ({ code: findings[n].code, verdict: findings[n].verdict, sentence: view.sentence(sentences[n][language]) }));
    let { verdict } = findings[decided];
    const unverified = verdict === "acceptable" ? weak(plan, intake, decided) : [];
    if (unverified.length) {
      verdict = "conditional";
      reported.unshift(engineFinding("rests-on-unverified-numbers", verdict, language, unverified.map((w) => w.name)));
    }
    if (beyond.length) {
      verdict = "undetermined";
      reported.unshift(engineFinding("spread-leaves-range", verdict, language, beyond.map((index) => slots[index].path)));
    }
    let listing = plan.layouts.get(language);
    if (!listing) plan.layouts.set(language, (listing = layout(model, plan, texts, language)));
    return {
      check: model.name,
      rule_set: { version, digest },
      input_digest: inputDigest,
      verdict,
      findings: reported,
      results: listing.results(view),
      working: listing.working(view),
      assumptions: assumptions(plan, results, intake, language),
      cautions: cautionList(plan, results, holding, language),
      unverified,
    };
  };
}
