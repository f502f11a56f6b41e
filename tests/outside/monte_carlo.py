"""A million draws of what a question states, for tests that propagate distributions by brute force."""
DRAWS = 1_000_000


def draws(rng, given):
    """10^6 draws of an input as the request states it; an exact number stays one."""
    if not isinstance(given, dict):
        return given
    if "between" in given:
        return rng.uniform(*given["between"], DRAWS)
    if "standard_uncertainty" in given:
        return rng.normal(given["value"], given["standard_uncertainty"], DRAWS)
    half = given.get("half_width", given["value"] * given.get("half_width_percent", 0) / 100)
    return rng.uniform(given["value"] - half, given["value"] + half, DRAWS)
