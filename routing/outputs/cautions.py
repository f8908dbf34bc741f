"""The usual cautions, shown with every plan, and what is said about prices that are invented."""

from __future__ import annotations

#: Common practice; none of it replaces the rules of the place or the engineer in charge.
CAUTIONS: tuple[str, ...] = (
    "Dam safety: drawdown changes the load on a dam, and a leak over its crest can wash it out.",
    "Drawdown rate: banks and upstream slopes can slide. Whoever answers for the dam must set the rate.",
    "Unattended valves: a siphon can run on, lose its prime or surge. Keep a watch on it.",
    "People downstream: flow starts and stops suddenly. Warn them; check the channel below the outlet.",
    "Planning figures only: local codes govern, and a licensed engineer must check the design.",
)

INVENTED_PRICES = "Prices are invented examples: no cost shown here means anything for a real job."
