"""Completion scripts for bash, zsh and fish, made from the parser itself so that they cannot fall behind."""

from __future__ import annotations

import argparse


def write_script(shell: str, parser: argparse.ArgumentParser) -> str:
    """Return the completion script of one shell ("bash", "zsh" or "fish") for the whole command line."""
    words = _words(parser)
    return {"bash": _bash, "zsh": _zsh, "fish": _fish}[shell](words)


def _words(parser: argparse.ArgumentParser) -> dict[str, list[str]]:
    words = {"": _options(parser)}
    for action in parser._actions:
        if isinstance(action, argparse._SubParsersAction):
            words[""] += list(action.choices)
            words |= {name: _options(command) for name, command in action.choices.items()}
    return words


def _options(parser: argparse.ArgumentParser) -> list[str]:
    return [option for action in parser._actions for option in action.option_strings if option.startswith("--")]


def _bash(words: dict[str, list[str]]) -> str:
    cases = "\n".join(f'    {name}) words="{" ".join(options)}" ;;' for name, options in words.items() if name)
    return f"""_cutworthy() {{
  local words
  case "${{COMP_WORDS[1]}}" in
{cases}
    *) words="{" ".join(words[""])}" ;;
  esac
  COMPREPLY=($(compgen -W "$words" -- "${{COMP_WORDS[COMP_CWORD]}}"))
}}
complete -o default -F _cutworthy cutworthy
"""


def _zsh(words: dict[str, list[str]]) -> str:
    return "autoload -U +X bashcompinit && bashcompinit\n" + _bash(words)


def _fish(words: dict[str, list[str]]) -> str:
    lines = []
    for name, options in words.items():
        when = f"__fish_seen_subcommand_from {name}" if name else "__fish_use_subcommand"
        for option in options:
            what = f"-l {option[2:]}" if option.startswith("--") else f"-a {option}"
            lines.append(f"complete -c cutworthy -n '{when}' {what}")
    return "\n".join(lines) + "\n"
