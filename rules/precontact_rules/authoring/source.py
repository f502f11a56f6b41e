"""The source folder as one object: every file read once, faults collected."""
from pathlib import Path

from .faults import Fault, nearest
from .reader import Map, read

FIXED_FOLDERS = ("cautions", "tables", "kinds", "checks", "parts", "cases")


class Source:
    """All rule sources below `folder`; `faults` grows as they are read and checked."""

    def __init__(self, folder):
        self.folder, self.faults = Path(folder), []
        self.rule_set = self._file("rule-set.yaml")
        self.sources = self._file("sources.yaml")
        self.limits = self._file("limits.yaml")
        for name in FIXED_FOLDERS:
            setattr(self, name, self._folder(name))
        self.entries = {}
        known = set(FIXED_FOLDERS)
        for kind, declared in self.kinds.items():
            folder = declared.get("folder", "")
            known.add(folder)
            self.entries[kind] = self._folder(folder) if folder else {}
        for path in sorted(self.folder.iterdir()):
            if path.is_dir() and path.name not in known:
                self.fault(path.name, 1, "a folder that no kind claims", f"a kind with folder: {path.name}, or one of {', '.join(FIXED_FOLDERS)}")

    def _file(self, name):
        path = self.folder / name
        if not path.exists():
            self.fault(name, 1, "no such file", "every rule set has one")
            return Map()
        return self._mapping(path, name)

    def _folder(self, name):
        return {path.stem: self._mapping(path, f"{name}/{path.name}") for path in sorted((self.folder / name).glob("*.yaml"))}

    def _mapping(self, path, name):
        content = read(path, name, self.faults)
        if isinstance(content, Map):
            content.file = name
            return content
        self.fault(name, 1, "not a mapping", "keys and values")
        return Map()

    def fault(self, file, line, found, expected):
        """Note one fault."""
        self.faults.append(Fault(file, line, found, expected))

    # ---- reading checked values out of mappings ----------------------------------------------------------------------------------------

    def keys(self, mapping, allowed, required=()):
        """Fault every key that is not allowed and every required one that is absent."""
        for key in mapping:
            if key not in allowed:
                self.fault(mapping.file, mapping.at(key), f"the key {key!r}", f"one of {nearest(key, allowed)}")
        for key in required:
            if key not in mapping:
                self.fault(mapping.file, mapping.line, f"no {key!r} here", f"{key} is required")

    def text(self, mapping, key, required=True):
        """A text {en, es}; faults one that is missing or lacks a language."""
        value = mapping.get(key)
        if value is None:
            if required:
                self.fault(mapping.file, mapping.line, f"no {key!r} here", "text as {en: ..., es: ...}")
            return {"en": "", "es": ""}
        if not isinstance(value, Map) or set(value) != {"en", "es"} or not all(isinstance(v, str) and v.strip() for v in value.values()):
            self.fault(mapping.file, mapping.at(key), f"{key!r} is not text in both languages", "{en: ..., es: ...}, neither empty")
            return {"en": "", "es": ""}
        return {language: " ".join(value[language].split()) for language in ("en", "es")}

    def origin(self, mapping, standing=True):
        """source, standing and cautious_in of a number; each is checked against what is known."""
        found = {"source": self.source(mapping)}
        if standing:
            found["standing"] = mapping.get("standing")
            if found["standing"] not in STANDINGS:
                self.fault(mapping.file, mapping.at("standing"), f"standing {found['standing']!r}", f"one of {', '.join(STANDINGS)}")
        if "cautious_in" in mapping:
            for check in mapping["cautious_in"]:
                if check not in self.checks:
                    self.fault(mapping.file, mapping.at("cautious_in"), f"cautious_in the check {check!r}", f"one of {', '.join(self.checks)}")
            found["cautious_in"] = {check: str(reason) for check, reason in mapping["cautious_in"].items()}
        return found

    def source(self, mapping):
        """The source string, its id checked."""
        value = mapping.get("source")
        if not isinstance(value, str) or not value:
            self.fault(mapping.file, mapping.line, "no source", 'an id of sources.yaml, a comma, the place: "iec-61008-1, Table 1"')
            return ""
        if value.split(",")[0].strip() not in self.sources:
            self.fault(mapping.file, mapping.at("source"), f"the source {value.split(',')[0]!r}", f"an id of sources.yaml: {nearest(value.split(',')[0], self.sources)}")
        return value


STANDINGS = ("text", "secondary", "computed", "convention", "practice", "informal", "memory")
