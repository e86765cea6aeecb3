"""Reserve rules as data: items, a registry of cited rules, and what becomes of them in a flight."""
