"""A geophone wired the wrong way is reversed in every record of its spread, also where one cannot tell."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Sequence

from .shot_in_work import ShotInWork
from .trace_faults import UNRELATED

REVERSED = "reversed"


def vote_on_polarity(shots: Sequence[ShotInWork]) -> None:
    """Set a channel aside where its polarity cannot be told, if most records that can tell call it reversed.

    Near the source, or in a noisy record, a trace agrees too little with its neighbours for a judgement of
    its own. At least two other records of the spread must call the channel reversed.
    """
    spreads: dict[int, list[ShotInWork]] = defaultdict(list)
    for shot in shots:
        if shot.located is not None:
            spreads[shot.spread].append(shot)
    for members in spreads.values():
        for channel, (against, judged) in _votes(members).items():
            if against >= 2 and 2 * against > judged:
                for shot in members:
                    _follow(
                        shot, channel, f"reversed polarity in {against} of {judged} records that can tell"
                    )


def _votes(members: Sequence[ShotInWork]) -> dict[int, tuple[int, int]]:
    """Per channel: records that call it reversed, and records that can tell."""
    votes: dict[int, tuple[int, int]] = defaultdict(lambda: (0, 0))
    for shot in members:
        if shot.located is None or shot.examination is None:
            continue
        for index, channel in enumerate(shot.located.channels):
            turned = shot.examination.faults.get(index, "").startswith(REVERSED)
            if turned or shot.examination.coherence[index] >= UNRELATED:
                against, judged = votes[int(channel)]
                votes[int(channel)] = (against + turned, judged + 1)
    return votes


def _follow(shot: ShotInWork, channel: int, reason: str) -> None:
    """Set the channel aside where the shot's own traces cannot tell."""
    if shot.located is None or shot.examination is None or channel not in shot.located.channels:
        return
    index = list(shot.located.channels).index(channel)
    if shot.sound[index] and not shot.examination.coherence[index] >= UNRELATED:
        shot.sound[index] = False
        shot.flags.append(f"channel {channel} set aside: {reason}")
