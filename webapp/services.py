"""What the callbacks share: the chip cache, the demo profiles and the library of particles."""

from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

from model.design import Design
from model.errors import DesignError, FieldError
from model.evaluate import Evaluation, evaluate
from model.files import FileError, Folder, Held, digest_of, either
from model.library import Entry
from model.profile import load_profile
from webapp.cache import ChipCache

#: Profiles that come with the program.
DEMO_PROFILES = Path(__file__).resolve().parent.parent / "demo_profiles"
#: The one that a visitor without a link sees.
FIRST_PROFILE = "rinse-water-yeast"
#: Points of the frequency axis on screen.
SCREEN_POINTS = 200


@dataclass(frozen=True)
class Services:
    """Handed to every callback when it is made.

    Parameters
    ----------
    chips
        Solves each chip once.
    profiles
        Designs that can be opened by name; the first is shown to a visitor without a link.
    library
        Published particles by id, and behind them the deployment's own.
    """

    chips: ChipCache
    profiles: dict[str, Design]
    library: dict[str, Entry]

    @property
    def first(self) -> Design:
        """The design that is shown when nothing else is asked for."""
        return next(iter(self.profiles.values()))

    def evaluate(self, design: Design) -> Evaluation:
        """Evaluate a design on its chip, solved at most once.

        Raises
        ------
        DesignError
            If a file that it names cannot be used, or a field does not reach far enough.
        """
        return evaluate(design, self.chips.patterns(design), points=SCREEN_POINTS)


def load_profiles(folder: Path, first: Path | None = None) -> dict[str, Design]:
    """Load every profile of a folder by file name, `first` before all others.

    Without `first`, :data:`FIRST_PROFILE` leads where the folder has it.

    Raises
    ------
    DesignError
        If a profile is bad, naming its file, or if there is none.
    """
    paths = sorted(folder.glob("*.toml"), key=lambda path: (path.stem != FIRST_PROFILE, path.stem))
    if first is not None:
        # a file of the same name would stand in its place, so it gives way
        paths = [first, *(path for path in paths if path.stem != first.stem)]
    if not paths:
        raise FileNotFoundError(f"{folder} holds no profile (*.toml)")
    found = {}
    for path in paths:
        try:
            found[path.stem] = load_profile(path)
        except DesignError as problem:
            problem.add_note(f"in {path}")
            raise
    return found


def files_of(profiles: dict[str, Design], folders: Iterable[Path]) -> Held:
    """Read the files that profiles name, and no others: visitors see what these hold.

    Raises
    ------
    DesignError
        If one is not in the folder of its profile.
    """
    sources = either(*map(Folder, folders))
    contents = []
    for design in profiles.values():
        needed = design.chip.needed_file
        if needed is not None:
            try:
                contents.append(sources(*needed))
            except FileError as problem:
                raise DesignError([FieldError("chip.file", needed[0], str(problem))]) from None
    return Held({digest_of(content): content for content in contents})
