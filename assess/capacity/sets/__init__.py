"""Built-in factor sets, one TOML file each, that name the published text they follow."""

from assess.capacity.sets.library import FactorSet, UnknownSetError, factor_set, set_names

__all__ = ["FactorSet", "UnknownSetError", "factor_set", "set_names"]
