"""Compares the medians of a side-by-side measurement with what the kernel promises.

usage: bench_check.py RESULT.json
"""
import json
import sys

with open(sys.argv[1]) as f:
    result = json.load(f)
python, ours = (result["kernels"][k]["metrics"] for k in ("python3", "ampturn"))
# what, the better is the larger figure, factor promised
promises = [
    ("startup: spawn -> kernel_info_reply", False, 5), ("execute 1+1: reply", False, 3), ("1,000 queued 1+1", True, 3),
    ("completion", False, 10), ("idle rss_mib", False, 2),
]
missed = []
for what, larger, factor in promises:
    a, b = python[what]["p50"], ours[what]["p50"]
    ratio = b / a if larger else a / b
    print(f"{what}: ipykernel {a:.3g}, ampturn {b:.3g} {ours[what]['unit']}: {ratio:.3g} times as good, promised {factor}")
    if ratio < factor:
        missed.append(what)
for note in result["kernels"]["ampturn"]["notes"]:
    missed.append(note)
if missed:
    sys.exit("missed: " + "; ".join(missed))
