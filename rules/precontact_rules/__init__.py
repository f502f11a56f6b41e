"""Precontact's rule engine: what a test instrument does to a live circuit, from released, digest-addressed rule sets. Knows no HTTP."""
from . import released
from .engine import RuleSet, UnknownLanguage
from .problems import InputProblems, Problem

__all__ = ["InputProblems", "Problem", "RuleSet", "UnknownLanguage", "released"]
