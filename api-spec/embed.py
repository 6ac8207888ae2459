"""Turns openapi.yaml into the C++ source that serves it.

Usage: embed.py openapi.yaml openapi_json.cpp

The JSON is exactly the YAML document: the same members in the same order. A value JSON does not
know (a bare date, say) ends the build.
"""

import json
import sys

import yaml

# The longest string literal every compiler must take.
CHUNK = 8000

HEADER = '#include "server/api/api.h"\n\nnamespace bandwright {\n\nstd::string_view openapi_json() {\n'


def main(source: str, target: str) -> None:
    with open(source, encoding="utf-8") as file:
        document = yaml.safe_load(file)
    text = json.dumps(document, ensure_ascii=True, separators=(",", ":"), allow_nan=False)
    literals = "\n".join(
        '      R"openapi(' + text[begin : begin + CHUNK] + ')openapi"'
        for begin in range(0, len(text), CHUNK)
    )
    with open(target, "w", encoding="utf-8") as file:
        file.write(HEADER + "  return\n" + literals + ";\n}\n\n}  // namespace bandwright\n")


if __name__ == "__main__":
    main(sys.argv[1], sys.argv[2])
