"""Precontact over HTTP: the released rule sets answer, this package only listens and speaks."""
from .factory import create_app

__all__ = ["create_app"]
