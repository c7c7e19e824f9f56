"""A hall of a browser test's own: the demo meet once more, in the server that all these tests share."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import httpx2

from tests.web.ready import Meet, Row


@dataclass(frozen=True)
class Hall:
    """The bar's platform of one copy of the demo meet: flight A in round 2 of the squat, lot 2 up at 112.5."""

    url: str
    meet: Meet
    meet_id: int
    bar: int

    @property
    def table(self) -> str:
        """The Table's address."""
        return f"{self.url}/platforms/{self.bar}/table"

    @property
    def crew(self) -> str:
        """The crew's address."""
        return f"{self.url}/platforms/{self.bar}/crew"

    def platform(self) -> Row:
        """The bar's platform as it stands."""
        return self.meet.platform(self.bar)

    def attempt(self, lot: int, number: int, lift: str = "Squat") -> Row:
        """One attempt of this meet."""
        return self.meet.row(
            "SELECT attempt.*, flight_id FROM attempt JOIN lifter ON lifter.id = lifter_id"
            " JOIN lift ON lift.id = lift_id WHERE meet_id = ? AND lot = ? AND lift.name = ? AND number = ?",
            self.meet_id,
            lot,
            lift,
            number,
        )

    def box(self, lot: int, number: int) -> str:
        """The id of a weight box on the Table."""
        return f"weight-{self.attempt(lot, number)['id']}"

    def entries(self) -> list[str]:
        """What has been entered on the platform, in words."""
        return [row["what"] for row in self.meet.journal() if row["platform_id"] == self.bar]

    def post(self, path: str, **data: Any) -> None:
        """Enter something from elsewhere; it must be taken."""
        answer = httpx2.post(f"{self.url}/platforms/{self.bar}/{path}", data=data)
        assert answer.status_code == 303, answer.text

    def declare(self, lot: int, number: int, weight: str) -> None:
        """Hand a weight in, with a reason in case a rule stands against the change."""
        attempt = self.attempt(lot, number)
        fields = {"attempt": attempt["id"], "version": attempt["version"], "weight": weight}
        self.post("weight", **fields, reason="the jury allows it")

    def judge(self, lot: int, number: int, result: str, lift: str = "Squat") -> None:
        """Enter a result."""
        attempt = self.attempt(lot, number, lift)
        self.post("result", attempt=attempt["id"], version=attempt["version"], result=result)


def new_hall(url: str, meet: Meet) -> Hall:
    """Take the first meet of a server out as a file and in again as another meet."""
    file = httpx2.get(f"{url}/meets/1/meet.json").content
    answer = httpx2.post(f"{url}/meets/file", files={"file": ("meet.json", file)})
    meet_id = int(answer.headers["location"].rpartition("/")[2])
    bar = meet.rows("SELECT id FROM platform WHERE meet_id = ? ORDER BY id", meet_id)[0]["id"]
    return Hall(url, meet, meet_id, bar)
