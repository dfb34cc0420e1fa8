"""Colours by what they mean, for light, dark and print; every picture reads them here."""

from __future__ import annotations

from dataclasses import dataclass, fields

BAND_STRENGTH = 0.5  # the band lies over the page at half strength


@dataclass(frozen=True, slots=True)
class Palette:
    """One theme; every colour is written "#RRGGBB".

    Parameters
    ----------
    page, panel : str
        Paper, and paper of raised parts.
    ink, soft : str
        Text and estimate stroke; second text and axis text.
    line, hair : str
        Controls and context series; rules and empty rails, which carry no meaning.
    people, figure : str
        What people answered; what is estimated from it.
    band : str
        Interval band, drawn at `BAND_STRENGTH` and always with an edge in `figure` or a label.
    problem : str
        Error text beside a word, never a mark in a picture.
    link : str
        Links, underlined.
    """

    page: str
    panel: str
    ink: str
    soft: str
    line: str
    hair: str
    people: str
    figure: str
    band: str
    problem: str
    link: str

    @property
    def band_on_page(self) -> str:
        """Return the colour the band has once it lies on the page."""
        return _mixed(self.band, self.page, BAND_STRENGTH)


LIGHT = Palette(
    page="#FAF8F3",
    panel="#F0EDE4",
    ink="#1D2327",
    soft="#545B5E",
    line="#8C8778",
    hair="#D9D4C6",
    people="#2C6570",
    figure="#93470F",
    band="#E7C7A4",
    problem="#8A2846",
    link="#1F5663",
)

DARK = Palette(
    page="#15191B",
    panel="#1F2527",
    ink="#ECE8DE",
    soft="#ADB1AC",
    line="#7C8685",
    hair="#363E40",
    people="#7FBBC6",
    figure="#E8A263",
    band="#6B421D",
    problem="#EE8BA6",
    link="#8CC7D2",
)

PRINT = Palette(
    page="#FFFFFF",
    panel="#FFFFFF",
    ink="#000000",
    soft="#333333",
    line="#666666",
    hair="#AAAAAA",
    people="#000000",
    figure="#000000",
    band="#D8D8D8",
    problem="#000000",
    link="#000000",
)


def css_variables(palette: Palette) -> str:
    """Return the declarations "--hr-page:#FAF8F3;--hr-panel:..." of one theme.

    Parameters
    ----------
    palette : Palette
        Theme.
    """
    return "".join(f"--hr-{name}:{value};" for name, value in _tokens(palette))


def css_variables_by_scheme(light: Palette = LIGHT, dark: Palette = DARK) -> str:
    """Return declarations that follow the `color-scheme` of the element that uses them.

    Parameters
    ----------
    light, dark : Palette
        The two themes.
    """
    pairs = zip(_tokens(light), _tokens(dark), strict=True)
    return "".join(f"--hr-{name}:light-dark({one},{two});" for (name, one), (_, two) in pairs)


def contrast(first: str, second: str) -> float:
    """Return the contrast ratio of two colours, 1 to 21.

    Parameters
    ----------
    first, second : str
        Colours, "#RRGGBB".

    References
    ----------
    W3C (2023), Web Content Accessibility Guidelines 2.2, definitions of contrast ratio and
    relative luminance.
    """
    lighter, darker = sorted((_luminance(first), _luminance(second)), reverse=True)
    return (lighter + 0.05) / (darker + 0.05)


def _tokens(palette: Palette) -> list[tuple[str, str]]:
    """Name and colour of each token, and the band as it lies on the page."""
    named = [(field.name, getattr(palette, field.name)) for field in fields(palette)]
    return [*named, ("band-on-page", palette.band_on_page)]


def _channels(colour: str) -> tuple[int, int, int]:
    return int(colour[1:3], 16), int(colour[3:5], 16), int(colour[5:7], 16)


def _mixed(over: str, under: str, strength: float) -> str:
    """One colour laid over another."""
    pairs = zip(_channels(over), _channels(under), strict=True)
    return "#" + "".join(f"{round(strength * a + (1 - strength) * b):02X}" for a, b in pairs)


def _luminance(colour: str) -> float:
    red, green, blue = (_linear(channel / 255) for channel in _channels(colour))
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


def _linear(channel: float) -> float:
    return channel / 12.92 if channel <= 0.04045 else float(((channel + 0.055) / 1.055) ** 2.4)
