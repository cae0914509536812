"""The last look at a calendar before it leaves: read back from its bytes, not through the library.

The library writes what it is given and leaves this check to its users (RFC 5545, sections
3.1, 3.4, 3.6 and 3.6.1). It knows the properties this program writes and no others.
"""

_MOST_OCTETS = 75  # of a line, its CRLF not counted (RFC 5545, 3.1)
_ONCE = ("UID", "DTSTAMP", "DTSTART", "DTEND", "SUMMARY", "SEQUENCE", "LAST-MODIFIED", "STATUS")
_RINGS = ("ACTION", "TRIGGER", "DESCRIPTION")

Properties = list[tuple[str, str]]


def calendar_faults(content: bytes) -> list[str]:
    """Return what readers would stumble over in a calendar, in sentences; none means it may be written."""
    faults = _line_faults(content)
    lines = content.replace(b"\r\n ", b"").decode("utf-8", "replace").split("\r\n")
    events = _components(lines, "VEVENT")
    if not events:
        faults.append("it holds no event")
    faults += [fault for event in events for fault in _event_faults(event)]
    uids = [value for event in events for name, value in event if name == "UID"]
    faults += [
        f"the event {uid} is there twice" for uid in sorted({uid for uid in uids if uids.count(uid) > 1})
    ]
    for alarm in _components(lines, "VALARM"):
        faults += [f"an alarm lacks {name}" for name in _RINGS if name not in dict(alarm)]
    return faults


def _line_faults(content: bytes) -> list[str]:
    """Return what is wrong with the lines themselves."""
    lines = content.split(b"\r\n")
    faults = []
    if any(len(line) > _MOST_OCTETS for line in lines):
        faults.append(f"a line is longer than {_MOST_OCTETS} octets")
    if lines[-1] or any(b"\n" in line or b"\r" in line for line in lines):
        faults.append("a line does not end in CRLF")
    return faults


def _components(lines: list[str], kind: str) -> list[Properties]:
    """Return the properties of each component of one kind, those of components inside it left out."""
    found: list[Properties] = []
    open_kinds: list[str] = []
    for line in lines:
        head, _, value = line.partition(":")
        name = head.partition(";")[0]
        if name == "BEGIN":
            open_kinds.append(value)
            found += [[]] if value == kind else []
        elif name == "END":
            open_kinds.pop()
        elif open_kinds and open_kinds[-1] == kind:
            found[-1].append((name, value))
    return found


def _event_faults(event: Properties) -> list[str]:
    """Return what is wrong with one event."""
    names = [name for name, _ in event]
    values = dict(event)
    title = values.get("SUMMARY", "an event")
    faults = [f"{title}: {name} stands {names.count(name)} times" for name in _ONCE if names.count(name) != 1]
    begin, end = values.get("DTSTART", ""), values.get("DTEND", "")
    if len(begin) != len(end) or end <= begin:
        faults.append(f"{title}: it ends at {end or 'no time'}, which is not after {begin or 'no time'}")
    if len(begin) > len("20261207") and not (begin.endswith("Z") and end.endswith("Z")):
        faults.append(f"{title}: its times are not UTC")
    if values.get("STATUS") not in {"CONFIRMED", "CANCELLED"}:
        faults.append(f"{title}: its status is {values.get('STATUS')}")
    return faults
