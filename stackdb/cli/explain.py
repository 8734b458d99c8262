"""``stackdb explain``."""

from __future__ import annotations

import click

from stackdb.errors import InputError


@click.command("explain", epilog="Example: stackdb explain confidence")
@click.argument("topic", required=False)
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
def command(*, topic: str | None, as_json: bool) -> None:
    """Explain a method in a few lines: formula, range, source; or list the topics."""
    from stackdb.output.explanations import TOPICS, explanation

    if topic is not None and topic not in TOPICS:
        from difflib import get_close_matches

        near = get_close_matches(topic, TOPICS, 1, 0.4)
        hint = f"nearest: {near[0]}" if near else f"there is {', '.join(TOPICS)}"
        raise InputError("topic-unknown", f'no topic "{topic[:40]}"', hint)
    text = explanation(topic) if topic else "\n".join(f" {name:<14} {TOPICS[name][0]}" for name in TOPICS)
    if as_json:
        from stackdb.output.machine import dumps

        text = dumps({"format": 1, "topic": topic, "topics": list(TOPICS), "text": text})
    click.echo(text)
