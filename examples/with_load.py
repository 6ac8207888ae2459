"""Prints a request with another load, a Touchstone file: python3 with_load.py REQUEST.json LOAD.s1p

The request on standard output is ready for `bandwrightd solve -` or for POST /v1/jobs.
"""

import json
import sys


def main():
    request_name, load_name = sys.argv[1:]
    with open(request_name, encoding="utf-8") as file:
        request = json.load(file)
    with open(load_name, encoding="utf-8") as file:
        request["load"] = {"touchstone": file.read()}
    request.pop("loads", None)
    json.dump(request, sys.stdout, indent=2)
    print()


if __name__ == "__main__":
    main()
