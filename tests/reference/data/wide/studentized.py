"""Computes both tails anew for every case of the files named below (Python 3 and a C++ compiler; no packages).

The quadruple precision program studentized.cpp, built with `g++ -O2 studentized.cpp -lquadmath` (GCC 12.2, libquadmath 12.2), does the
integrals; this script hands it the parameters of each case, exactly the doubles of the file, and writes `value`, the upper tail,
and `lower`, the lower one, with 18 digits. `python3 studentized.py` writes the files; `python3 studentized.py --check` only compares.
"""

import json
import pathlib
import subprocess
import sys

HERE = pathlib.Path(__file__).parent
KINDS = {
    "studentized_range": "range",
    "studentized_maximum": "maximum",
    "many_to_one_both": "both",
    "many_to_one_greater": "greater",
}


def line(kind, case):
    """The program's input for one case."""
    df = case["df"] if case["df"] == "inf" else repr(case["df"])
    if kind in ("range", "maximum"):
        return f"{kind} {case['k']} {df} {case['q' if kind == 'range' else 'm']!r}"
    return " ".join([kind, df, repr(case["d"]), str(len(case["loadings"])), *map(repr, case["loadings"])])


def main():
    program = HERE / "studentized"
    subprocess.run(["g++", "-O2", str(HERE / "studentized.cpp"), "-o", str(program), "-lquadmath"], check=True)
    for name, kind in KINDS.items():
        path = HERE / f"{name}.json"
        table = json.loads(path.read_text())
        lines = "\n".join(line(kind, case) for case in table["cases"]) + "\n"
        # Steps are halved until the sums change by less than 1e-14; the finer sums are the answer.
        output = subprocess.run([str(program), "1e-14"], input=lines, text=True, capture_output=True, check=True).stdout
        for case, result in zip(table["cases"], output.splitlines(), strict=True):
            lower, upper, _ = result.split(" ")
            values = {"value": digits(upper), "lower": digits(lower)}
            if "--check" in sys.argv:
                assert {key: case[key] for key in values} == values, (name, case, values)
            case.update(values)
        if "--check" not in sys.argv:
            write(path, table)
    program.unlink()


def digits(text):
    """18 digits of the program's 20, cut."""
    mantissa, exponent = text.split("e")
    return f"{mantissa[:19]}e{int(exponent)}"


def write(path, table):
    head = {key: value for key, value in table.items() if key != "cases"}
    cases = ",\n".join("  " + json.dumps(case) for case in table["cases"])
    path.write_text(json.dumps(head, indent=1)[:-2] + ',\n "cases": [\n' + cases + "\n ]\n}\n")


if __name__ == "__main__":
    main()
