"""A CP-SAT model that every feasible order satisfies: it bounds prize and cost of the whole and proposes orders.

One module each for the variables and for each family of constraints; `model` wires them, `run` solves in stages.
Importing this package imports OR-Tools.
"""
