"""What each printed page carries at its foot, as a generated style sheet: plant, digest, page number."""

from __future__ import annotations


def css_string(text: str) -> str:
    """`text` as a CSS string in which nothing but letters, digits and blanks stands unescaped."""
    safe = "".join(c if c.isascii() and (c.isalnum() or c == " ") else f"\\{ord(c):x} " for c in text)
    return f'"{safe}"'


def paper_style(plant_name: str, digest: str) -> bytes:
    """The style sheet. Browsers without margin boxes ignore it; the heads of tables carry the same words."""
    foot = css_string(f"{plant_name} · description {digest[:12]}")
    font = 'font: 8pt "Segoe UI", "Helvetica Neue", Roboto, "Liberation Sans", sans-serif; color: #333;'
    return (
        "@page {\n"
        f"  @bottom-left {{ content: {foot}; {font} }}\n"
        f'  @bottom-right {{ content: counter(page) " of " counter(pages); {font} }}\n'
        "}\n"
    ).encode()
