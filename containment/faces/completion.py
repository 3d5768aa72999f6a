"""Completion of commands and options in a shell: a script printed once, made from the parsers themselves."""

import argparse
import importlib
from collections.abc import Mapping
from typing import Any, Final

__all__ = ["SHELLS", "Completion", "completion_script"]

SHELLS: Final = ("bash", "zsh", "fish")


class Completion(argparse.Action):
    """The option that prints the script and leaves."""

    def __init__(self, *, commands: Mapping[str, tuple[str, str]], **named: Any) -> None:
        super().__init__(nargs=None, choices=SHELLS, default=argparse.SUPPRESS, **named)
        self._commands = commands

    def __call__(self, parser: argparse.ArgumentParser, *rest: Any) -> None:
        """Print the script for the shell that is named."""
        print(completion_script(rest[1], self._commands), end="")
        parser.exit()


def _options(module: str) -> dict[str, tuple[str, list[str]]]:
    """Return the options of a command: help, and what their value is chosen from."""
    parser = argparse.ArgumentParser(add_help=True)
    importlib.import_module(module).add_arguments(parser)
    return {
        action.option_strings[-1]: (action.help or "", [str(choice) for choice in action.choices or ()])
        for action in parser._actions
        if action.option_strings
    }


def completion_script(shell: str, commands: Mapping[str, tuple[str, str]]) -> str:
    """Return the script for a shell; `commands` maps each command to its module and its line of help."""
    found = {name: _options(module) for name, (module, _) in commands.items()}
    if shell == "fish":
        return _fish(found, commands)
    lines = [
        f"# containment: completion for {shell}; put into the shell's start file:",
        f'#   eval "$(containment --completion {shell})"',
    ]
    if shell == "zsh":
        lines.append("autoload -U +X bashcompinit && bashcompinit")
    lines += [
        "_containment() {",
        '    local word="${COMP_WORDS[COMP_CWORD]}" before="${COMP_WORDS[COMP_CWORD-1]}" known=""',
        '    if [ "$COMP_CWORD" -eq 1 ]; then',
        f'        known="{" ".join(found)} --help --version"',
        "    else",
        '        case "${COMP_WORDS[1]} $before" in',
    ]
    for name, options in found.items():
        chosen = [(option, choices) for option, (_, choices) in options.items() if choices]
        lines += [f'            "{name} {option}") known="{" ".join(choices)}" ;;' for option, choices in chosen]
    lines += [f'            "{name} "*) [ "${{word#-}}" != "$word" ] && known="{" ".join(options)}" ;;'
              for name, options in found.items()]  # fmt: skip
    lines += [
        "        esac",
        "    fi",
        '    COMPREPLY=($(compgen -W "$known" -- "$word"))',
        "}",
        "complete -o default -F _containment containment",
        "",
    ]
    return "\n".join(lines)


def _fish(found: Mapping[str, Mapping[str, tuple[str, list[str]]]], commands: Mapping[str, tuple[str, str]]) -> str:
    def quoted(text: str) -> str:
        return "'" + text.replace("\\", "\\\\").replace("'", "\\'") + "'"

    lines = ["# containment: completion for fish; put into ~/.config/fish/completions/containment.fish"]
    for name, (_, line) in commands.items():
        lines.append(f"complete -c containment -n __fish_use_subcommand -f -a {name} -d {quoted(line)}")
        for option, (words, choices) in found[name].items():
            values = f" -x -a {quoted(' '.join(choices))}" if choices else ""
            lines.append(
                f"complete -c containment -n '__fish_seen_subcommand_from {name}' -l {option.removeprefix('--')}{values} "
                f"-d {quoted(words)}"
            )
    return "\n".join([*lines, ""])
