"""How warm may the product get at a given drive point (invented scenario: a glucose syrup, upside-down for a minute)?

The verdict over temperature, and then the chance of holding where the temperature of the product is known only roughly.
"""

import numpy as np

import containment as ct

LINE = {
    "name": "glucose syrup 42 DE", "cylinder": "70 mm", "depth": "30 mm", "dwell": "60 s", "frequency": "60 Hz",
    "acceleration": "45 g_n",
}  # fmt: skip
CELSIUS = np.arange(30.0, 60.5, 1.0)
DELIVERY = {"distribution": "normal", "sd": "3 K", "low": "30 degC", "high": "60 degC"}


def main() -> None:
    over = ct.sweep(**LINE, temperature=CELSIUS + 273.15)
    verdicts = over["verdict"]
    for verdict in ("held", "marginal", "not held"):
        some = CELSIUS[verdicts == verdict]
        where = f", from {some[0]:.0f} to {some[-1]:.0f} degC" if len(some) else ""
        print(f"{verdict:9s} at {len(some)} of {len(CELSIUS)} temperatures{where}")
    held = np.flatnonzero(verdicts == "held")
    if not len(held):
        print("held nowhere")
        return
    last = next((i for i in held if i + 1 == len(CELSIUS) or verdicts[i + 1] != "held"), held[-1])
    print(f"keep it from {CELSIUS[held[0]]:.0f} to {CELSIUS[last]:.0f} degC: colder it creeps out, warmer it splashes")
    print("delivered at  chance of holding (95 % interval)")
    for mean in ("40 degC", "46 degC", "52 degC"):
        result = ct.study(
            {
                "study": {"proof": True},
                "fixed": LINE,
                "uncertain": {"temperature": {**DELIVERY, "mean": mean}},
                "sample": {"method": "random", "count": 60},
            }
        )
        chance = result.holding_probabilities()[0]
        print(f"{mean:>12s}  {100 * chance.probability:5.1f} % ({100 * chance.low:.1f} to {100 * chance.high:.1f})")


if __name__ == "__main__":
    main()
