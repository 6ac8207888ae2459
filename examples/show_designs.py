"""Prints a finished job as a table: python3 show_designs.py ANSWER.json ("-": standard input)."""

import json
import sys
import textwrap


def percent(share):
    return f"{100 * share:.2f} %"


def megahertz(hertz):
    return f"{hertz / 1e6:g} MHz"


def network(elements):
    """The parts in order from the source to the load."""
    return ", ".join(f"{e['place']} {e['label']}" for e in elements)


def yield_text(design):
    if "yield" not in design:
        return "-"
    y = design["yield"]
    return f"{percent(y['value'])} ({100 * y['low']:.2f} to {percent(y['high'])})"


def return_loss_text(design):
    """The worst over all bands in which return loss is wanted."""
    values = [goal["value_db"] for goal in design["goals"]
              if goal["quantity"] == "return_loss" and goal["bound"] != "at_most"]
    return f"{min(values):.2f} dB" if values else "-"


def row(design):
    return [
        str(design["rank"]),
        return_loss_text(design),
        f"{design['margin_db']:+.2f} dB",
        yield_text(design),
        f"{design['efficiency_db']:.2f} dB",
        network(design["network"]),
    ]


def goal_text(goal):
    bound = f" {goal['bound'].replace('_', ' ')}"
    bound += f" {goal['bound_db']:g} dB" if "bound_db" in goal else ""
    return f"{goal['quantity']}{bound} over {megahertz(goal['from_hz'])} to {megahertz(goal['to_hz'])}"


def table(rows):
    widths = [max(len(r[i]) for r in rows) for i in range(len(rows[0]))]
    return "\n".join(
        "  ".join(cell.ljust(width) for cell, width in zip(r, widths)).rstrip() for r in rows
    )


def main():
    with sys.stdin if sys.argv[1] == "-" else open(sys.argv[1], encoding="utf-8") as file:
        job = json.load(file)
    if job["state"] != "succeeded":
        failure = job.get("failure", {})
        sys.exit(f"the job is {job['state']}: {failure.get('detail', 'no detail')}")

    designs = job["designs"]
    unmatched = job["unmatched"]
    print(f"\n{job.get('name', 'unnamed job')}, seed {job['seed']}: {job['stop_reason']}")
    for goal in designs[0]["goals"] if designs else []:
        print(f"goal: {goal_text(goal)}")
    print(
        f"without a network: return loss {unmatched['return_loss_db']:.2f} dB "
        f"at {megahertz(unmatched['at_hz'])}"
    )
    if "limit" in job:
        print(f"limit of any lossless network: return loss {job['limit']['return_loss_db']:.2f} dB")
    print()
    head = ["rank", "return loss", "margin", "yield (95 % interval)", "efficiency",
            "parts from the source to the load"]
    print(table([head] + [row(d) for d in designs]))
    for title in ("warnings", "cautions"):
        if job[title]:
            print(f"\n{title}:")
        for text in job[title]:
            print(textwrap.fill(text, 100, initial_indent="- ", subsequent_indent="  "))


if __name__ == "__main__":
    main()
