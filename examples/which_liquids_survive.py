"""Which of ten liquids survive a given line (invented scenario: cups of 40 mm on a shaker of fixed stroke and speed)?

Each liquid is judged at the line's drive point; those that are not held are asked for the least drive that would do.
"""

import containment as ct

LIQUIDS = (
    "water", "olive oil", "ISO VG 1000", "castor oil", "glycerol", "epoxy resin", "silicone oil 12500", "honey 18",
    "corn syrup 77", "polyester resin 450",
)  # fmt: skip
LINE = {"cylinder": "40 mm", "depth": "20 mm", "dwell": "30 s", "temperature": "30 degC"}
DRIVE = {"frequency": "80 Hz", "stroke": "4 mm"}


def main() -> None:
    at_the_line = list(ct.sweep(name=list(LIQUIDS), **LINE, **DRIVE).records)
    lost = [record["name"] for record in at_the_line if record["verdict"] != "held"]
    least = {record["name"]: record for record in ct.sweep(name=lost, **LINE).records} if lost else {}
    for record in at_the_line:
        name = record["name"]
        if record.get("error"):
            print(f"{name:20s} no verdict: {record['error']}")
            continue
        line = f"{name:20s} {record['verdict']:9s} nearest limit: {record['binding']}"
        if name in least:
            other = least[name]
            if other["minimum_acceleration_m_s2"] is None:
                line += "; no drive holds it"
            else:
                line += (
                    f"; holds from {other['minimum_acceleration_m_s2'] / 9.80665:.0f} g_n at "
                    f"{other['minimum_acceleration_at_Hz']:.0f} Hz"
                )
        print(line)
    print(f"{len(LIQUIDS) - len(lost)} of {len(LIQUIDS)} survive")


if __name__ == "__main__":
    main()
