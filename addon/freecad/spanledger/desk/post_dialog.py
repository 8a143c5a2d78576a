"""The window that shows what will be posted, and where to."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from ..present.posting import PostPreview
from ..qt import Qt, QtWidgets, Signal
from ..texts import translate
from .fields import button, entry


class PostDialog(QtWidgets.QDialog):
    """Stays open beside FreeCAD's window; nothing is written before "Post" is pressed."""

    wanted = Signal(str, bool)
    """Where to, and whether the members are changed in the model too."""

    def __init__(self, source: Path, shown: PostPreview, parent: Any = None) -> None:
        super().__init__(parent)
        self.setObjectName("SpanledgerPost")
        self.setWindowTitle(translate("Spanledger", "Post results"))
        self.source = source
        self.copy = QtWidgets.QRadioButton(translate("Spanledger", "into a copy"))
        self.copy.setObjectName("SpanledgerPostCopy")
        self.itself = QtWidgets.QRadioButton(translate("Spanledger", "into the model itself"))
        self.itself.setObjectName("SpanledgerPostItself")
        self.copy.setChecked(True)
        proposed = source.with_name(f"{source.stem}_posted{source.suffix}")
        self.path = entry("SpanledgerPostPath", str(proposed))
        self.browse = button("SpanledgerPostBrowse", translate("Spanledger", "Choose…"))
        words = shown.summary
        if shown.refusal:
            not_so = translate("Spanledger", "Sections and materials stay as the model has them:")
            words += f"\n⚠ {not_so} {shown.refusal}"
        summary = QtWidgets.QLabel(words)
        summary.setObjectName("SpanledgerPostSummary")
        summary.setTextFormat(Qt.TextFormat.PlainText)
        summary.setWordWrap(True)
        self.tree = _tree(shown)
        self.members = QtWidgets.QGroupBox(
            translate("Spanledger", "Change the sections and materials in the model too")
        )
        self.members.setObjectName("SpanledgerPostMembers")
        self.members.setCheckable(True)
        self.members.setVisible(bool(shown.changes))
        changes = QtWidgets.QVBoxLayout(self.members)
        changes.addWidget(_changes_tree(shown))
        self.post = button("SpanledgerPostNow", translate("Spanledger", "Post"))
        self.post.setDefault(True)
        cancel = button("SpanledgerPostCancel", translate("Spanledger", "Cancel"))
        self._lay_out(summary, cancel)
        self.itself.toggled.connect(lambda on: self._copy_enabled(not on))
        self.browse.clicked.connect(self._choose)
        self.post.clicked.connect(self._post)
        cancel.clicked.connect(self.reject)

    def target(self) -> str:
        """Return where the results go."""
        return str(self.source) if self.itself.isChecked() else self.path.text().strip()

    def _lay_out(self, summary: Any, cancel: Any) -> None:
        where = QtWidgets.QHBoxLayout()
        where.addWidget(self.path, 1)
        where.addWidget(self.browse)
        buttons = QtWidgets.QHBoxLayout()
        buttons.addStretch(1)
        buttons.addWidget(self.post)
        buttons.addWidget(cancel)
        layout = QtWidgets.QVBoxLayout(self)
        layout.addWidget(summary)
        layout.addWidget(self.members, 1)
        layout.addWidget(self.tree, 1)
        layout.addWidget(self.copy)
        layout.addLayout(where)
        layout.addWidget(self.itself)
        layout.addLayout(buttons)
        self.resize(760, 560)

    def _copy_enabled(self, on: bool) -> None:
        self.path.setEnabled(on)
        self.browse.setEnabled(on)

    def _choose(self) -> None:
        path, _kind = QtWidgets.QFileDialog.getSaveFileName(
            self, translate("Spanledger", "Post results into a copy"), self.path.text(),
            translate("Spanledger", "IFC models (*.ifc *.ifczip)"),
        )  # fmt: skip
        if path:
            self.path.setText(path)

    def _post(self) -> None:
        if self.target():
            self.accept()
            changing = not self.members.isHidden() and self.members.isChecked()
            self.wanted.emit(self.target(), changing)


def _tree(shown: PostPreview) -> Any:
    tree = QtWidgets.QTreeWidget()
    tree.setObjectName("SpanledgerPostTree")
    tree.setHeaderLabels(
        [translate("Spanledger", "Element, set, property"), translate("Spanledger", "Value")]
    )
    by_element: dict[str, Any] = {}
    for posted in shown.sets:
        top = by_element.get(posted.element)
        if top is None:
            top = by_element[posted.element] = QtWidgets.QTreeWidgetItem([posted.element])
            tree.addTopLevelItem(top)
        group = QtWidgets.QTreeWidgetItem([posted.name])
        top.addChild(group)
        for name, value in posted.values:
            group.addChild(QtWidgets.QTreeWidgetItem([name, value]))
    tree.setColumnWidth(0, 320)
    if tree.topLevelItemCount():
        tree.expandItem(tree.topLevelItem(0))
        tree.expandItem(tree.topLevelItem(0).child(0))
    return tree


def _changes_tree(shown: PostPreview) -> Any:
    tree = QtWidgets.QTreeWidget()
    tree.setObjectName("SpanledgerPostChanges")
    tree.setAccessibleName(translate("Spanledger", "What is changed in the model"))
    tree.setRootIsDecorated(False)
    tree.setAlternatingRowColors(True)
    tree.setHeaderLabels(
        [translate("Spanledger", "Element"), translate("Spanledger", "What"),
         translate("Spanledger", "Is"), translate("Spanledger", "Becomes")]
    )  # fmt: skip
    stays = translate("Spanledger", "stays, though it may no longer fit")
    for change in shown.changes:
        row = [change.element, change.what, change.old, change.new or stays]
        tree.addTopLevelItem(QtWidgets.QTreeWidgetItem(row))
    for column in range(4):
        tree.resizeColumnToContents(column)
    return tree
