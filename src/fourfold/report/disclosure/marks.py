"""What a mark itself gives away: sums of counts that are all said to be small."""

from __future__ import annotations

from fourfold.report.disclosure.ledger import SMALL, Key, Ledger


def sums_of_small(ledger: Ledger) -> list[Key]:
    """Small counts that are made up of several small ones.

    They are not marked as small: two parts that are known to be at least 1, with a total known to be
    below the limit, would be as good as told.
    """
    if ledger.limit.least == 0:
        return []
    parts: dict[Key, list[list[Key]]] = {}
    for relation in ledger.relations:
        whole = next((key for key, by in relation.items() if by < 0), None)
        if whole is None:
            continue
        parts.setdefault(whole, []).append([key for key in relation if key != whole])
    marked: dict[Key, tuple[bool, bool]] = {}

    def look(key: Key) -> tuple[bool, bool]:
        """Is a count within ``key`` marked as small, and are there several, one beside the other?"""
        if key not in marked:
            marked[key] = (False, False)
            own = ledger.counts[key].hidden == SMALL
            below = [
                [look(part) for part in one] for one in parts.get(key, []) if not ledger.counts[key].shown
            ]
            several = any(sum(any_small for any_small, _ in one) > 1 for one in below)
            deeper = any(branching for one in below for _, branching in one)
            within = any(any_small for one in below for any_small, _ in one)
            marked[key] = (own or within, several or deeper)
        return marked[key]

    return [key for key, count in ledger.counts.items() if count.hidden == SMALL and look(key)[1]]
