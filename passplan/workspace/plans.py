"""The folder of plans: one file an edition, written whole or not at all, never overwritten."""

import hashlib
import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from pathlib import Path

from passplan.domain.errors import InputError, Mistake
from passplan.domain.plan import IssuedPlan, Plan
from passplan.workspace.documents import read_text
from passplan.workspace.plan_json import from_json, load, to_json
from passplan.workspace.register import Entered, enter, entered
from passplan.workspace.whole_file import publish

SAME_CONTACT = timedelta(minutes=20)  # an orbit takes 87 min or more, and elements never err so much

_FILE = re.compile(r"(\d{4}-W\d{2})-([1-9]\d*)\.json")
_ID = re.compile(r"([A-Z][A-Z0-9]*)-(\d+)")


@dataclass(frozen=True, kw_only=True, slots=True)
class Numbered:
    """A contact that has been given its name."""

    satellite: str
    station: str
    tca_utc: datetime
    id: str


@dataclass(frozen=True, kw_only=True, slots=True)
class PlanStore:
    """The plans of one workspace.

    Attributes:
        folder: the workspace; plans lie in its `plans/`, made at the first write.
    """

    folder: Path

    @property
    def home(self) -> Path:
        """The folder the plans lie in."""
        return self.folder / "plans"

    def weeks(self) -> tuple[str, ...]:
        """Return the weeks that have a plan, in order."""
        return tuple(sorted({week for week, _ in self._editions()}))

    def editions(self, week: str) -> tuple[int, ...]:
        """Return the numbers of a week's editions, in order."""
        return tuple(sorted(edition for found, edition in self._editions() if found == week))

    def latest(self, week: str) -> int | None:
        """Return the number of a week's last edition; None where there is no plan."""
        return max(self.editions(week), default=None)

    def path(self, week: str, edition: int) -> Path:
        """Return where an edition lies or would lie."""
        return self.home / f"{week}-{edition}.json"

    def read(self, week: str, edition: int | None = None) -> Plan:
        """Return one edition of a week, the last one when none is named.

        Raises:
            InputError: there is none, or it cannot be read.
        """
        known = self.editions(week)
        if not known:
            some = ", ".join(self.weeks()) or "none"
            told = f"no plan for this week; there are plans for: {some}"
            raise InputError([Mistake("plans/", "", week, told)])
        if edition is not None and edition not in known:
            told = f"no such edition; there are: {', '.join(map(str, known))}"
            raise InputError([Mistake("plans/", "", f"{week} edition {edition}", told)])
        path = self.path(week, edition or known[-1])
        return from_json(read_text(path, self._told(path)), self._told(path))

    def issued(self, week: str) -> tuple[IssuedPlan, ...]:
        """Return all editions of a week, in order, with the moments the register has for them.

        Raises:
            InputError: a plan or the register cannot be read, or an edition is not in it.
        """
        moments = {(line.week, line.edition): line.made_utc for line in entered(self.home)}
        lost = [edition for edition in self.editions(week) if (week, edition) not in moments]
        if lost:
            told = "the register has no line for this plan; put the line back"
            raise InputError(
                [Mistake(self._told(self.path(week, edition)), "", "", told) for edition in lost]
            )
        return tuple(
            IssuedPlan(plan=self.read(week, edition), made_utc=moments[week, edition])
            for edition in self.editions(week)
        )

    def write(self, plan: Plan, made_utc: datetime) -> Path:
        """Write a plan as a new edition and enter it in the register; return its file.

        A reader sees the whole file or none. Where anything fails nothing stays behind.

        Args:
            plan: its week and edition name the file.
            made_utc: aware moment for the register; the plan itself carries no clock.

        Raises:
            InputError: the edition is there already, or the folder cannot be written.
        """
        content = to_json(plan).encode("ascii")
        path = self.path(plan.horizon.week, plan.edition)
        digest = hashlib.sha256(content).hexdigest()
        line = Entered(week=plan.horizon.week, edition=plan.edition, made_utc=made_utc, sha256=digest)
        if path.exists():
            told = "there already, and editions are never overwritten"
            raise InputError([Mistake(self._told(path), "", "", told)])
        try:
            self.home.mkdir(exist_ok=True)
            publish(path, content)
            try:
                enter(self.home, line)
            except BaseException:
                path.unlink()
                raise
        except OSError as error:
            told = f"cannot be written: {(error.strerror or str(error)).lower()}"
            raise InputError([Mistake(self._told(path), "", "", told)]) from None
        return path

    def contact_numbers(self) -> tuple[Numbered, ...]:
        """Return every contact that was ever given a name, as its last plan has it, by name.

        Contacts of the look-ahead count, as people may have seen their names in `--json`.

        Raises:
            InputError: a plan cannot be read; without it a name might be given twice.
        """
        known: dict[str, Numbered] = {}
        for week, edition in sorted(self._editions()):
            path = self.path(week, edition)
            data = load(read_text(path, self._told(path)), self._told(path))
            try:
                for row in [*data["contacts"], *data["lookahead"]]:
                    tca_utc = datetime.fromisoformat(row["tca_utc"])
                    known[row["id"]] = Numbered(
                        satellite=row["satellite"], station=row["station"], tca_utc=tca_utc, id=row["id"]
                    )
            except (KeyError, TypeError, ValueError):
                told = "its contacts cannot be read; put the file back as it was written"
                raise InputError([Mistake(self._told(path), "contacts", "", told)]) from None
        return tuple(known[name] for name in sorted(known))

    def next_id(self, station_code: str) -> str:
        """Return the first name at a station that no contact has had."""
        return _named(station_code, _highest(self.contact_numbers(), station_code) + 1)

    def contact_ids(self, wanted: Sequence[tuple[str, str, datetime]]) -> tuple[str, ...]:
        """Return the names of contacts: the one each had before, else new ones in the order given.

        Args:
            wanted: (satellite, station code, aware moment of TCA) of each contact.
        """
        known = self.contact_numbers()
        matched = _matched(known, wanted)
        highest: dict[str, int] = {}
        names = []
        for number, (_, station, _) in enumerate(wanted):
            if number not in matched:
                highest[station] = highest.get(station, _highest(known, station)) + 1
            names.append(matched.get(number) or _named(station, highest[station]))
        return tuple(names)

    def _editions(self) -> list[tuple[str, int]]:
        """Return (week, edition) of every plan file."""
        if not self.home.is_dir():
            return []
        names = (_FILE.fullmatch(path.name) for path in self.home.iterdir())
        return [(name[1], int(name[2])) for name in names if name]

    def _told(self, path: Path) -> str:
        """Return a path as people would type it in the workspace."""
        return path.relative_to(self.folder).as_posix()


def _matched(known: Iterable[Numbered], wanted: Sequence[tuple[str, str, datetime]]) -> dict[int, str]:
    """Return number in `wanted` to the name it had, nearest TCA first, each name once."""
    near = sorted(
        (abs(one.tca_utc - tca_utc), number, one.id)
        for number, (satellite, station, tca_utc) in enumerate(wanted)
        for one in known
        if (one.satellite, one.station) == (satellite, station) and abs(one.tca_utc - tca_utc) < SAME_CONTACT
    )
    matched: dict[int, str] = {}
    for _, number, name in near:
        if number not in matched and name not in matched.values():
            matched[number] = name
    return matched


def _highest(known: Iterable[Numbered], station_code: str) -> int:
    """Return the highest number given at a station, 0 where none was."""
    names = (_ID.fullmatch(one.id) for one in known)
    return max((int(name[2]) for name in names if name and name[1] == station_code), default=0)


def _named(station_code: str, number: int) -> str:
    """Return the name of a contact: QUA-01, and QUA-100 when there have been many."""
    return f"{station_code}-{number:02d}"
