"""Off to the laptop: into a folder that it sees, or over the local network while this screen is open."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from kivy.app import App
from kivy.clock import Clock
from kivy.properties import BooleanProperty, StringProperty

from core.errors import BenchError
from core.handover.archive import zipped
from core.handover.share_page import PageTexts
from core.handover.sync import Synced
from mobileapp.device.find import on_android
from mobileapp.device.places import find_places
from mobileapp.figures import clock_time
from mobileapp.gathering import with_answers
from mobileapp.navigation import Page
from mobileapp.trace import trace
from mobileapp.widgets import basics, folder_list  # noqa: F401  the .kv of this screen uses them
from mobileapp.widgets.basics import ChoicePress
from mobileapp.words import _, language, say
from mobileapp.writing import write_session


class HandoverScreen(Page):
    """One session at a time: the one at hand."""

    session_text = StringProperty("")
    has_runs = BooleanProperty(False)
    ready = BooleanProperty(False)
    place = StringProperty("")
    written_text = StringProperty("")
    fault_text = StringProperty("")
    busy = BooleanProperty(False)
    choosing = BooleanProperty(False)

    sharing = BooleanProperty(False)
    address = StringProperty("")
    code = StringProperty("")
    left_text = StringProperty("")
    share_told = StringProperty("")
    locked = BooleanProperty(False)

    server: Any = None  # the ShareServer while it is open

    def arrive(self, **_aim: Any) -> None:
        session = self.model.session
        count = sum(not run.open for run in session.runs) if session else 0
        self.has_runs = count > 0
        self.session_text = _("{title} · runs: {count}").format(title=session.title, count=count) if session else ""
        self.written_text = self.fault_text = self.share_told = ""
        self.choosing = False
        self.ready = False
        self._list_places()
        if self.has_runs:
            with_answers(self.model, self._are_ready)
        self._ticking = Clock.schedule_interval(self._look, 0.5)
        app = App.get_running_app()
        if app:
            app.bind(on_pause=self._away)

    def leave(self) -> None:
        self._ticking.cancel()
        self.stop_sharing()
        app = App.get_running_app()
        if app:
            app.unbind(on_pause=self._away)

    def _away(self, *_args: Any) -> None:
        """The hand-over lives only while its screen is in front."""
        self.stop_sharing()

    def _are_ready(self) -> None:
        self.ready = True

    # ------------------------------------------------------------------ into a folder

    def _list_places(self) -> None:
        box = self.ids.places
        box.clear_widgets()
        self.places = list(find_places(on_android()))
        for place in self.places:
            box.add_widget(self._place_button(place.name, str(place.path)))
        box.add_widget(self._place_button(_("Another folder …"), ""))
        self.take(str(self.places[0].path))

    def _place_button(self, name: str, path: str) -> ChoicePress:
        button = ChoicePress(text=name)
        button.path = path
        button.bind(on_release=lambda pressed: self.take(pressed.path) if pressed.path else self.choose())
        return button

    def take(self, path: str) -> None:
        """Write to this place."""
        self.place = path
        self.choosing = False
        known = {str(place.path) for place in self.places}
        for button in self.ids.places.children:
            button.chosen = button.path == path or (not button.path and path not in known)

    def choose(self) -> None:
        """Walk to another folder."""
        self.choosing = True
        self.ids.folders.open(Path(self.place).parent)

    def take_folder(self) -> None:
        self.take(self.ids.folders.folder)

    def write(self) -> None:
        """Bring the folder of this session up to date there."""
        session, place = self.model.export_session(), Path(self.place)
        self.busy = True
        self.written_text = self.fault_text = ""

        def work() -> Synced | str:
            return write_session(session, place, on_android())

        self.model.ask("hand over", work, self._written, self._not_written)

    def _written(self, done: Synced | str) -> None:
        self.busy = False
        if isinstance(done, str):
            self.written_text = _("The session was written to {place} as one zip file.").format(place=done)
        else:
            self.written_text = "\n".join(say(one) for one in done.sentences())
        trace("handed over", text=self.written_text)

    def _not_written(self, sentence: str) -> None:
        self.busy = False
        self.fault_text = say(sentence)

    # ------------------------------------------------------------------ over the local network

    def share(self) -> None:
        """Open the hand-over with the session as it is now."""
        self.share_told = ""
        from core.handover.share_server import ShareServer, local_address  # asyncio is loaded when it is wanted

        try:
            name, data = zipped(self.model.export_session())
            self.server = ShareServer.open(name, data, local_address(), _page_texts())
        except BenchError as refusal:
            self.share_told = say(str(refusal))
            return
        self.sharing = True
        self._look()
        trace("sharing", address=self.address)

    def new_code(self) -> None:
        if self.server is not None:
            self.server.renew()
            self._look()

    def stop_sharing(self) -> None:
        server, self.server = self.server, None
        self.sharing = False
        self.code = self.address = self.left_text = ""
        self.locked = False
        if server is not None:
            server.close()

    def _look(self, *_args: Any) -> None:
        """What the server says of itself."""
        if self.server is None:
            return
        status = self.server.status()
        if not status.open:
            self.stop_sharing()
            self.share_told = _("The time was over; the hand-over closed itself.")
            return
        self.address = status.address
        self.code = f"{status.code[:3]} {status.code[3:]}"
        self.left_text = _("The code holds for {time} min more.").format(time=clock_time(status.left_s))
        if status.locked and not self.locked:
            trace("sharing locked")
        self.locked = status.locked
        if status.locked:
            self.share_told = _("Locked after five wrong codes. Ask for a new code to go on.")
        elif status.fetched:
            self.share_told = _("Fetched so far: {count}.").format(count=status.fetched)
        elif status.wrong:
            self.share_told = _("Wrong codes so far: {count}.").format(count=status.wrong)
        else:
            self.share_told = _("Waiting for the laptop.")


def _page_texts() -> PageTexts:
    """The laptop's page in the language of the tablet."""
    return PageTexts(
        language=language(),
        title=_("A session from the tablet"),
        ask=_("Type the code that the tablet shows."),
        button=_("Fetch the zip file"),
        plain=_(
            "This page comes over plain HTTP: on this local network the file travels unencrypted. It is there "
            "only as long as the tablet shows its hand-over screen."
        ),
        wrong=_("That was not the code. Tries left: {left}."),
        locked=_("Too many wrong codes. On the tablet, ask for a new code."),
        busy=_("Too many requests at once. Try again in a moment."),
        other=_("There is nothing here."),
    )
