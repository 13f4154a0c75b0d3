"""SciPy's side of tests/benches/numbers.mjs: a request a line in, {"seconds", "answer"} a line out."""

import json
import sys
import time

import scipy
from scipy import stats


def all_pairs(groups):
    """Tukey's p-values and 95 % intervals of every later group less every earlier one."""
    result = stats.tukey_hsd(*groups)
    bounds = result.confidence_interval(confidence_level=0.95)
    pairs = [(j, i) for i in range(len(groups)) for j in range(i + 1, len(groups))]
    return [[float(of[pair]) for of in (result.pvalue, bounds.low, bounds.high)] for pair in pairs]


def against_first(groups):
    """Dunnett's p-values and 95 % intervals of every other group less the first."""
    result = stats.dunnett(*groups[1:], control=groups[0])
    bounds = result.confidence_interval(confidence_level=0.95)
    return [[float(x) for x in row] for row in zip(result.pvalue, bounds.low, bounds.high)]


def tail(q, groups, df):
    return float(stats.studentized_range.sf(q, groups, float(df)))


def quantile(upper_p, groups, df):
    return float(stats.studentized_range.ppf(1 - upper_p, groups, float(df)))


print(json.dumps({"version": scipy.__version__}), flush=True)
for line in sys.stdin:
    request = json.loads(line)
    job, arguments = globals()[request["job"]], request["arguments"]
    calls = request["calls"]
    start = time.perf_counter()
    for _ in range(calls):
        answer = job(*arguments)
    seconds = (time.perf_counter() - start) / calls
    print(json.dumps({"seconds": seconds, "answer": answer}), flush=True)
