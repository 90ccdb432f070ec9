"""Pattern families: ordinary patterns made for any number of strands and any colours."""

from patterns.families.table import FAMILIES, Family, FamilyError, make_family

__all__ = ["FAMILIES", "Family", "FamilyError", "make_family"]
