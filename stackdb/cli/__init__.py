"""The command line: thin commands, loaded when called; errors as one line, or as JSON where JSON was asked for."""

from __future__ import annotations

import sys

import click

from stackdb import __version__
from stackdb.errors import InputError, StackdbError

HEADINGS = {
    "Look up": ("find", "show", "sources"),
    "Work out": ("compose", "touch", "edges", "compare", "size", "tolerance"),
    "Hand over": ("change", "verify", "explain"),
}
TRY = (
    "stackdb show soda-lime-glass",
    'stackdb compose "soda-lime-glass 1.8mm / acrylic-oca 150um"',
    "stackdb compose front.toml --json",
)
COMMANDS = tuple(name for names in HEADINGS.values() for name in names)


class Commands(click.Group):
    """Commands by name; a module of ``stackdb.cli`` is imported only when its command is called."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """All commands, in the order of the headings."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """The command of that name, its module imported now."""
        if cmd_name not in COMMANDS:
            return None
        from importlib import import_module

        command: click.Command = import_module(f"stackdb.cli.{cmd_name}").command
        return command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """As click's, with an unknown command as one of our errors, the nearest named."""
        name = args[0]
        if name.startswith("-") or name in COMMANDS:
            return super().resolve_command(ctx, args)
        from difflib import get_close_matches

        from stackdb.quantities import printable

        near = get_close_matches(name, COMMANDS, 1, 0.5)
        hint = f"nearest: {near[0]}" if near else f"there is {', '.join(COMMANDS)}"
        raise InputError("command-unknown", f'no command "{printable(name[:60])}"', hint)


def overview() -> str:
    """What bare ``stackdb`` prints."""
    rows = [f" {heading:<12} {'  '.join(names)}" for heading, names in HEADINGS.items()]
    rows += ["", f" {'Try':<12} {TRY[0]}", *(f" {'':<12} {t}" for t in TRY[1:])]
    return "\n".join([*rows, "", " stackdb COMMAND --help shows a command with an example you can run."])


@click.group(cls=Commands, invoke_without_command=True, context_settings={"help_option_names": ["--help"]})
@click.version_option(__version__, message="stackdb %(version)s")
@click.pass_context
def group(ctx: click.Context) -> None:
    """What a touch sensor sees through a stack of dielectrics: permittivities with their sources, gaps with their ranges."""
    if ctx.invoked_subcommand is None:
        click.echo(overview())


def _report(error: StackdbError, arguments: list[str]) -> int:
    from stackdb.output.terminal import encodable

    if "--json" in arguments:
        from stackdb.output.machine import dumps

        sys.stdout.write(encodable(dumps(error.to_dict()), sys.stdout.encoding) + "\n")
    else:
        sys.stderr.write(encodable(str(error), sys.stderr.encoding) + "\n")
    return error.exit_status


def _from_click(error: click.ClickException) -> StackdbError:
    from stackdb.quantities import printable

    command = error.ctx.command_path if isinstance(error, click.UsageError) and error.ctx else "stackdb"
    text = printable(error.format_message().replace("\n", " ").rstrip("."))
    return InputError("usage", text[:300], f"see {command} --help")


def run(arguments: list[str]) -> int:
    """Run the command line and return its exit status."""
    try:
        status = group.main(args=arguments, prog_name="stackdb", standalone_mode=False)
        sys.stdout.flush()
        return status if isinstance(status, int) else 0
    except StackdbError as error:
        return _report(error, arguments)
    except click.exceptions.Exit as ended:
        return ended.exit_code
    except click.ClickException as error:
        return _report(_from_click(error), arguments)
    except (KeyboardInterrupt, click.Abort):
        sys.stderr.write("interrupted\n")
        return 130


def main() -> None:
    """The entry point: a reader that closes the pipe early ends us quietly."""
    import os

    try:
        status = run(sys.argv[1:])
        sys.stdout.flush()
    except BrokenPipeError:
        # Point standard output elsewhere, or the interpreter complains again when it flushes at exit.
        os.dup2(os.open(os.devnull, os.O_WRONLY), 1)
        status = 0
    sys.exit(status)
