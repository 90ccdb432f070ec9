"""Cutting the last few put-ups of a plan from cheaper ones."""

from collections import Counter
from collections.abc import Sequence
from dataclasses import replace
from itertools import combinations_with_replacement

from planner.cutting.filling import Filling, Supply, fill_all
from planner.cutting.knapsack import Fullest, LongestFirst
from planner.cutting.packs import SoldAs
from planner.cutting.task import Plan, Task

TAIL_PUT_UPS = 4
TAIL_CHOICES = 5_000
TAIL_TRIES = 60


def with_cheaper_tail(task: Task, plan: Plan) -> Plan:
    """Cut what the last few put-ups hold from other put-ups that cost less, while that is possible.

    Parameters
    ----------
    task
        The problem.
    plan
        A plan for it.

    Returns
    -------
    Plan
        The plan itself or a cheaper one.

    Notes
    -----
    Buying by price per length used is right in the long run and wrong at the end, where a dear
    short put-up may do.
    """
    while len(task.sold) > 1 and all(item.is_single for item in task.sold):
        cheaper = _cheaper(task, plan)
        if cheaper is None:
            break
        plan = cheaper
    return plan


def _cheaper(task: Task, plan: Plan) -> Plan | None:
    bought = [
        replace(item, repeats=1)
        for item in plan.fillings
        if item.put_up is not None
        for _ in range(min(item.repeats, TAIL_PUT_UPS))
    ]
    bought.sort(key=lambda item: item.used)
    for count in range(1, min(TAIL_PUT_UPS, len(bought)) + 1):
        tail = bought[:count]
        recut = _cut_cheaper(task, tail)
        if recut is not None:
            return task.plan(_without(plan.fillings, tail) + recut)
    return None


def _without(fillings: list[Filling], tail: list[Filling]) -> list[Filling]:
    removed = Counter(tail)
    kept = []
    for filling in fillings:
        gone = min(filling.repeats, removed[replace(filling, repeats=1)])
        removed[replace(filling, repeats=1)] -= gone
        if filling.repeats > gone:
            kept.append(replace(filling, repeats=filling.repeats - gone))
    return kept


def _cut_cheaper(task: Task, tail: list[Filling]) -> list[Filling] | None:
    demand: Counter[int] = Counter()
    for filling in tail:
        demand.update(dict(filling.pieces))
    cost = task.plan(tail).cost
    need = sum(length * count for length, count in demand.items())
    for choice in _cheaper_choices(task.sold, cost, need, len(tail) + 1):
        supplies = [
            Supply(task.sold[index].length_mm, task.sold[index].size, number, index)
            for index, number in sorted(Counter(choice).items())
        ]
        for filler in (Fullest(), LongestFirst()):
            fillings = fill_all(demand, supplies, [], filler, task.deadline)
            if fillings is not None:
                return fillings
    return None


def _cheaper_choices(
    sold: Sequence[SoldAs], cost: int, need: int, most: int
) -> list[tuple[int, ...]]:
    choices = []
    for count in range(1, most + 1):
        for number, choice in enumerate(combinations_with_replacement(range(len(sold)), count)):
            if number >= TAIL_CHOICES:
                break
            price = sum(sold[index].price for index in choice)
            if price < cost and sum(sold[index].size for index in choice) >= need:
                choices.append((price, choice))
    return [choice for _, choice in sorted(choices)[:TAIL_TRIES]]
