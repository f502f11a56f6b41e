/**
 * The inputs of a check as its bundle declares them, flattened into slots.
 *
 * A slot is one leaf field: `path` is its name in formulas, `axis` the list it runs along or null, `pointer` its place in a body (`*` for the
 * item's number), `reference` the path of the catalogue reference it belongs to or null, `factor` from its unit to SI, `only` the branches it
 * applies in or null for all. The tree is what the validator walks: [field, slot or path, children].
 */
export function declaredInputs(bundle, name) {
  const slots = [];
  const walk = (fields, prefix, pointer, axis, reference, only) => fields.map((field) => {
    const { kind, name: own, key, only: applies = only } = field, path = prefix + own, place = `${pointer}/${key}`;
    if (kind === "group") return [field, null, walk(field.fields, `${path}.`, place, axis, reference, applies)];
    if (kind === "list") return [field, null, walk(field.fields, `${field.item}.`, `${place}/*`, field.item, reference, applies)];
    if (kind === "reference") return [field, path, walk(bundle.kinds[field.of].fields, `${path}.`, place, axis, path, applies)];
    const factor = kind === "number" ? bundle.units[field.unit].factor : 1;
    const slot = { index: slots.length, path, axis, pointer: place, reference, only: applies, kind, unit: field.unit ?? null, factor, field };
    slots.push(slot);
    return [field, slot, null];
  });
  return { tree: walk(bundle.checks[name].inputs, "", "", null, null, null), slots };
}
