"""Reads the compiled function's result for one answer: numbers with their intervals, and the words of a sentence."""
import math

import numpy as np

from .layout import no_value

_LEAST, _MOST = -math.inf, math.inf      # a number strictly between them is finite; NaN is between nothing


class Reader:
    """The view of one request's results that the answer writer and the sentences look through."""

    def __init__(self, writer, intake, plan, results, intervals, language):
        self.model, self.texts, self.quantity_writer = writer.model, writer.texts, writer.quantity
        self.intake, self.plan, self.language = intake, plan, language
        self.results, self.intervals = results, intervals

    # ---- results -------------------------------------------------------------------------------------------------------------------

    def result(self, output):
        """The public form of a result whose value the numbers decide."""
        value = self.results[output.place]
        if output.samples is None and not output.axes:
            return self._one(value, None, None, output)
        low, high = (None, None) if output.samples is None else self.intervals[output.samples]
        if output.axes:
            return self._along(output.axes, np.asarray(value), low, high, output)
        return self._one(value, low, high, output)

    def _along(self, axes, value, low, high, output):
        axis, rest = axes[0], axes[1:]
        items = []
        for place in range(value.shape[0]):
            ends = (None, None) if low is None else (np.asarray(low)[place], np.asarray(high)[place])
            item = self._along(rest, value[place], *ends, output) if rest else self._one(self._scalar(value[place]), *ends, output)
            if self.model.axis_from(axis) == "entries":
                item = {"id": self.model.entry_ids(axis)[place], **(item if isinstance(item, dict) else {"items": item})}
            items.append(item)
        return items

    def _one(self, value, low, high, output):
        if value is True or value is False:
            return {"value": value}
        value = self._scaled(value, output.factor)      # which may leave the numbers that there are
        if not _LEAST < value < _MOST:
            return {"value": None, "reason": no_value(output.formula, self.texts, self.language)}
        if output.names:
            return self._named(output.names, int(value))
        if low is None:
            return {"value": value}
        low, high = self._scaled(float(low), output.factor), self._scaled(float(high), output.factor)
        if not (_LEAST < low and high < _MOST):
            return {"value": value, "low": None, "high": None, "reason": self.texts["partly-no-value"][self.language]}
        return {"value": value, "low": low, "high": high}

    @staticmethod
    def _scalar(value):
        return bool(value) if value.dtype == bool else float(value)

    @staticmethod
    def _scaled(value, factor):
        return (value if factor == 1 else value / factor) + 0.0    # + 0.0 turns a negative zero into zero

    def _named(self, axis, place):
        if not 0 <= place < self._size(axis):
            return {"value": None, "reason": self.texts["no-value"][self.language]}
        if self.model.axis_from(axis) == "entries":
            return {"value": self.model.entry_ids(axis)[place], "title": self.name_at(axis, place)}
        return {"value": place, "title": self.name_at(axis, place)}

    def _size(self, axis):
        return self.intake.sizes.get(axis, 0) if self.model.axis_from(axis) == "list" else self.model.axis_size(axis)

    def name_at(self, axis, place):
        """What a person calls the item or entry at a place of an axis."""
        if self.model.axis_from(axis) == "entries":
            return self.model.entry_title(axis, place)[self.language]
        label = self.model.slot_index.get(axis + ".label")
        if label is not None and self.intake.states[label] != "a" and self.intake.values[label][place]:
            return self.intake.values[label][place]
        for path, titles in self.intake.titles.items():
            if path.startswith(axis + ".") and titles[place]:
                return titles[place][self.language]
        return self.texts["item-number"][self.language].replace("{number}", str(place + 1))

    # ---- working -------------------------------------------------------------------------------------------------------------------

    def plain(self, output):
        """A formula's value for the working where it runs along an axis: a list, or complex lists as an object."""
        value = self._bare(self.results[output.place], output.factor)
        return value if output.imaginary is None else {"re": value, "im": self._bare(self.results[output.imaginary], output.factor)}

    def _bare(self, value, factor):
        if type(value) is float:
            value = self._scaled(value, factor)
            return value if _LEAST < value < _MOST else None
        if value is True or value is False:
            return value
        value = np.asarray(value)
        if value.ndim:
            return [self._bare(v, factor) for v in value]
        return self._bare(self._scalar(value), factor)

    # ---- sentences -----------------------------------------------------------------------------------------------------------------

    def words(self, name):
        """What stands in a sentence for {name}: a quantity with its unit, a choice's meaning, or a title."""
        output = self.plan.outputs.get(name)
        if output is not None:
            return self._formula_words(output)
        if name in self.intake.titles:
            return self.intake.titles[name][self.language]
        index = self.model.slot_index.get(name)
        if index is None:
            constant = self.model.constant_or_none(name)
            return self._quantity(constant["value"], constant["unit"]) if constant else self._quantity(None, None)     # a reference not given
        return self._slot_words(self.model.slots[index], self.intake.states[index], self.intake.values[index])

    def _formula_words(self, output):
        formula = output.formula
        if output.absent is not None or output.hidden:
            return self._quantity(None, formula["unit"])
        value = output.fixed if output.place is None else self.results[output.place]
        if isinstance(value, bool):
            return self.texts["yes" if value else "no"][self.language]
        if isinstance(value, str):
            return value
        if "names" in formula:
            return self.name_at(formula["names"], int(value)) if math.isfinite(value) else self._quantity(None, formula["unit"])
        if output.imaginary is not None:
            value = math.sqrt(value * value + self.results[output.imaginary] * self.results[output.imaginary])
        return self._quantity(value if math.isfinite(value) else None, formula["unit"])

    def _slot_words(self, slot, state, value):
        if slot.kind == "choice" and state is not None:
            return next(c["meaning"][self.language] for c in slot.field["choices"] if c["key"] == state)
        if slot.kind == "text" and state != "a":
            return value
        if slot.kind == "switch" and state is not None:
            return self.texts["yes" if state else "no"][self.language]
        if state in (None, "a"):
            return self._quantity(None, slot.unit)
        return self._quantity(value[1] if isinstance(value, tuple) else value, slot.unit)

    def _quantity(self, value, unit):
        return self.quantity_writer(unit, self.language)(value)

    def listed(self, name, condition):
        """For {axis.label | condition}: the names of the items for which the condition holds."""
        axis = name.split(".")[0]
        output = self.plan.outputs[condition]
        if output.absent is not None or output.fixed is False:
            return []
        size = self._size(axis)
        holds = [True] * size if output.fixed is True else np.asarray(self.results[output.place]).tolist()
        if isinstance(holds, bool):
            holds = [holds] * size
        return [self.name_at(axis, place) for place in range(size) if holds[place]]
