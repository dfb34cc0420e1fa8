"""Words that stand for no answer, and words that stand for "not chosen", in several languages.

The lists are common practice in fieldwork files, no single source.
"""

from __future__ import annotations

import re

from app.study.questions import MissingReason

_WORDS = {
    MissingReason.DONT_KNOW: (
        "don't know", "dont know", "do not know", "dk", "d/k", "dk/na", "can't say", "cannot say",
        "not sure", "unsure", "undecided", "no opinion", "don't know/can't say",
        "don't know / can't say", "weiß nicht", "weiß ich nicht", "w. n", "keine meinung",
        "unentschieden",
        "ne sait pas", "je ne sais pas", "nsp", "sans opinion", "sans avis",
        "no sabe", "no sé", "ns/nc", "non so", "non sa", "senza opinione",
        "weet niet", "weet ik niet", "geen mening", "vet ej", "vet inte", "ved ikke", "vet ikke",
        "não sabe", "não sei", "nie wiem", "trudno powiedzieć", "en osaa sanoa", "nevím",
    ),
    MissingReason.REFUSED: (
        "refused", "refusal", "refused to answer", "refuses", "prefer not to say",
        "prefer not to answer", "rather not say", "would rather not say",
        "declined to answer", "verweigert", "antwort verweigert", "möchte ich nicht sagen",
        "refus", "refuse de répondre", "ne souhaite pas répondre", "rehúsa", "no contesta",
        "prefiero no decirlo", "rifiuta", "preferisco non rispondere", "weigert", "geweigerd",
        "zeg ik liever niet", "vill ej svara", "vill inte svara", "ønsker ikke at svare",
        "recusa", "prefere não responder", "odmowa", "odmowa odpowiedzi",
    ),
    MissingReason.NOT_ASKED: (
        "not asked", "not applicable", "does not apply", "filtered", "skipped",
        "question not asked", "nicht gestellt", "nicht gefragt", "trifft nicht zu", "entfällt",
        "non posée", "non applicable", "sans objet", "no aplica", "no procede",
        "non applicabile", "niet gevraagd", "niet van toepassing", "nvt", "n.v.t",
        "ej aktuellt", "ikke relevant", "não se aplica", "nie dotyczy",
    ),
    MissingReason.NO_ANSWER: (
        "no answer", "no response", "not answered", "not stated", "missing", "no reply", "n/a",
        "k. a", "k.a", "keine angabe", "keine angaben", "keine antwort", "ohne angabe",
        "sans réponse", "pas de réponse", "non réponse", "sin respuesta", "sem resposta",
        "nessuna risposta", "geen antwoord", "inget svar", "intet svar", "ej svar",
        "brak odpowiedzi", "brak danych", "ei vastausta", ".", "-", "--", "?",
    ),
}  # fmt: skip
_NOT_CHOSEN = frozenset(
    (
        "no", "n", "not chosen", "not selected", "not mentioned", "not ticked", "unchecked", "off",
        "false", "nein", "nicht genannt", "nicht gewählt", "non", "non cité", "faux", "falsch",
        "nee", "niet genoemd", "nej", "nei", "não", "nie", "vero no", "falso", "ei", "unselected",
        "not quoted", "quoted no", "no mencionado",
    )
)  # fmt: skip
_CHOSEN = frozenset(
    (
        "yes", "y", "x", "chosen", "selected", "mentioned", "ticked", "checked", "on", "true", "ja",
        "genannt", "gewählt", "oui", "cité", "vrai", "wahr", "sí", "si", "sì", "sim", "tak",
        "kyllä", "genoemd", "verdadero", "vero", "quoted", "mencionado", "✓", "✔",
    )
)  # fmt: skip
_SPACES = re.compile(r"\s+")
_BRACKETS = re.compile(r"^[\[(<*]+|[\])>*]+$")


def normal_text(text: str) -> str:
    """Return a label for comparing: lower case, straight apostrophes, no brackets, one space."""
    plain = text.casefold().replace("’", "'").replace("`", "'").replace("ß", "ss")
    plain = _BRACKETS.sub("", _SPACES.sub(" ", plain).strip()).strip()
    return plain.rstrip(".!") if len(plain) > 1 else plain


_REASON_OF = {normal_text(word): reason for reason, words in _WORDS.items() for word in words}


def reason_of_word(text: str) -> MissingReason | None:
    """Return what a label stands for when it is no answer, else None.

    "None", "NA" and "null" are answers: a brand or a country can be called so.
    """
    return _REASON_OF.get(normal_text(text))


def is_not_chosen(text: str) -> bool:
    """Whether a cell of several answers says that this answer was not given."""
    return normal_text(text) in _NOT_CHOSEN


def is_chosen(text: str) -> bool:
    """Whether a cell of several answers is a plain yes, not a label."""
    return normal_text(text) in _CHOSEN
