"""One module per resource, each making its blueprint from the released rule sets."""
