"""The rules of a session: kept as the few texts that its Rules page shows, read into :class:`Rules`."""

from __future__ import annotations

from collections.abc import Mapping

from app.desk.entry import Desk, platform_entry
from app.desk.errors import NotAllowedNow
from app.meet.rule_presets import RULE_PRESETS, departures, rule_preset
from app.meet.rule_reading import read_rules, rules_document
from app.store.picture import get
from app.store.tables import SessionRow


def save_rules(desk: Desk, platform_id: int, session_id: int, typed: Mapping[str, str], *, who: str) -> str:
    """These are the rules of the session from now on; refused whole when one of them cannot be."""
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        row = get(work.session, SessionRow, session_id, "session")
        if session_id not in now.rules:
            raise NotAllowedNow("This session is not on this platform. Go back and choose it again.")
        rules = read_rules(typed, now.unit)
        if isinstance(rules, list):
            raise NotAllowedNow(" ".join(rules))
        document = rules_document(rules)
        if rules_document(now.rules[session_id]) != document:
            row.rules = document
        other = departures(document, rule_preset(rules.preset), now.unit)
        told = f"; other than the preset: {', '.join(other)}" if other else ""
        work.what = f"{row.name}: rules{told}"
        return f"The rules of {row.name} are kept."


def preset_names() -> list[tuple[str, str, str]]:
    """Key, name and a sentence for each set of rules to start from."""
    return [(one.key, one.name, one.about) for one in RULE_PRESETS]
