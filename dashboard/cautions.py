"""The cautions of the trade, in our words, each shown where the work is."""

from __future__ import annotations

from dashboard.marks import Html, caution, element
from fleet.report.documents import GENERAL_CAUTION
from fleet.report.wording import capital

ODDS = caution("No safety check", "these odds are an estimate from records. Inspect every robot today before it runs.")

OPENING = caution(
    "Before you open a joint",
    "power off, battery out, stored charge gone, limb and robot supported: the limb falls when the joint lets go.",
)

REASSEMBLY = caution(
    "After reassembly",
    "turn the joint by hand through its whole travel, then run it at low power behind a barrier.",
)

BATTERY = caution(
    "Battery", "swollen, hot or dropped: do not charge it or run it, take it outdoors and away from people."
)

PRINTING = caution(
    "Printing unattended",
    "a smoke alarm and a cut-off beside the printers, fumes led outdoors, dryers never left to themselves.",
)

FOOTER: Html = element(
    "div",
    f"{capital(GENERAL_CAUTION)}. All odds, counts and dates ahead are estimates from what was logged.",
    class_="foot",
    role="contentinfo",
)
