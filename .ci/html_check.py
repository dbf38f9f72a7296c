"""Looks into a page that nbconvert made: highlighted Go, pictures, tables. nbconvert itself fails on an error.

usage: html_check.py PAGE
"""
import re
import sys

page = open(sys.argv[1], encoding="utf-8").read()
found = {
    "highlighted Go": len(re.findall(r'<span class="(?:nx|nf|mf|s|o|k[a-z]?)">', page)),
    "pictures": page.count('src="data:image/svg+xml'),
    "tables": page.count('<table class="at"'),
}
print(", ".join(f"{n} {what}" for what, n in found.items()))
if 'highlight hl-go' not in page or not all(found.values()):
    sys.exit("the page lacks something")
