"""`commission compare`: a visit's readings against what the design predicts at the conditions of that visit."""

from __future__ import annotations

import json
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from commission.cli.options import json_option, plant_argument, say
from commission.errors import CommissionError

if TYPE_CHECKING:
    from commission.description import LoadedPlant
    from commission.records import FiledRecord


@click.command(name="compare")
@plant_argument
@click.argument("record", type=click.Path(path_type=Path))
@json_option
def command(plant: Path, record: Path, as_json: bool) -> None:
    """Judge RECORD, a visit to PLANT, without filing it.

    A filed record keeps its frozen verdict; what today's description says of it stands beside, labelled so. Leaves with
    1 where a guarantee is not met, with 0 where it is met, undecided, or where nothing is guaranteed.
    """
    from commission.description import load_plant
    from commission.records import is_filed, judge_record, read_filed, read_record

    loaded = load_plant(plant)
    outcome: str | None
    if is_filed(record):
        outcome, text, data = _filed(loaded, read_filed(record))
    else:
        from commission.cli.judgement import as_text, not_compared

        visit = read_record(record, loaded)
        judgement = judge_record(loaded, visit)
        for sentence in not_compared(visit, loaded):
            say(f"mind: {sentence}")
        outcome, text, data = judgement.outcome, as_text(judgement, loaded), judgement.as_data()
    click.echo(json.dumps(data, indent=2, ensure_ascii=False) if as_json else text)
    if outcome == "not conforming":
        raise click.exceptions.Exit(1)


def _filed(loaded: LoadedPlant, filed: FiledRecord) -> tuple[str, str, dict[str, Any]]:
    """Frozen verdict first, then the recomputation, or why there is none."""
    from commission.cli.judgement import as_text
    from commission.records import recompute

    seal = "its seal holds" if filed.seal_holds else "ITS SEAL IS BROKEN: the file was changed after it was filed"
    lines = [f"{filed.id}, filed; {seal}", f"verdict, frozen: {filed.filed.sentence}", ""]
    data: dict[str, Any] = {
        "outcome": filed.verdict,
        "filed": {"id": filed.id, "verdict": filed.verdict, "sentence": filed.filed.sentence,
                  "judged_by": filed.filed.judged_by.model_dump(), "seal_holds": filed.seal_holds},
    }  # fmt: skip
    try:
        again = recompute(loaded, filed)
    except CommissionError as error:
        reason = error.problems[0].message
        lines.append(f"not recomputed: because {reason}")
        data["not_recomputed"] = reason
    else:
        lines += [again.label, *(f"  changed: {change}" for change in again.changed), as_text(again.judgement, loaded)]
        data["recomputed"] = {
            "label": again.label,
            "changed": list(again.changed),
            "judgement": again.judgement.as_data(),
        }
    return filed.verdict, "\n".join(lines), data
