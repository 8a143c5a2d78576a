<?xml version="1.0" encoding="utf-8"?>
<!DOCTYPE TS>
<TS version="2.1" language="de">
  <context>
    <name>Spanledger</name>
    <message>
      <source>'{name}' is no longer the model in front.</source>
      <translation>„{name}“ ist nicht mehr das Modell im Vordergrund.</translation>
    </message>
    <message>
      <source>'{name}' or its job file changed; balance its lines again.</source>
      <translation>'{name}' oder die Auftragsdatei hat sich geändert; die Trägerzüge neu ausgleichen.</translation>
    </message>
    <message>
      <source>'{path}' is not there; the lines are shown as they were kept. Open the model again from where it is now.</source>
      <translation>'{path}' ist nicht da; die Trägerzüge werden gezeigt, wie sie gespeichert sind. Das Modell von seinem jetzigen Ort neu öffnen.</translation>
    </message>
    <message>
      <source>'{path}' would be overwritten; choose another file.</source>
      <translation>„{path}“ würde überschrieben; wählen Sie eine andere Datei.</translation>
    </message>
    <message>
      <source>(itself)</source>
      <translation>(selbst)</translation>
    </message>
    <message>
      <source>1 other line changed: {lines}.</source>
      <translation>1 weiterer Trägerzug geändert: {lines}.</translation>
    </message>
    <message>
      <source>1 span</source>
      <translation>1 Feld</translation>
    </message>
    <message>
      <source>2.5 m or 50 %</source>
      <translation>2.5 m oder 50 %</translation>
    </message>
    <message>
      <source>3D: {quantity}</source>
      <translation>3D: {quantity}</translation>
    </message>
    <message>
      <source>Action on {mark}</source>
      <translation>Einwirkung auf {mark}</translation>
    </message>
    <message>
      <source>Add the action</source>
      <translation>Einwirkung hinzufügen</translation>
    </message>
    <message>
      <source>An action on {mark} changed</source>
      <translation>Eine Einwirkung auf {mark} geändert</translation>
    </message>
    <message>
      <source>An action on {mark} taken out</source>
      <translation>Eine Einwirkung auf {mark} entfernt</translation>
    </message>
    <message>
      <source>An envelope gathers many distributions. Choose a case or a combination to see the one that belongs to it.</source>
      <translation>Eine Umhüllende fasst viele Ausgleiche zusammen. Einen Lastfall oder eine Kombination wählen, um den zugehörigen zu sehen.</translation>
    </message>
    <message>
      <source>Apply</source>
      <translation>Anwenden</translation>
    </message>
    <message>
      <source>As the model has it</source>
      <translation>Wie im Modell</translation>
    </message>
    <message>
      <source>At</source>
      <translation>Bei</translation>
    </message>
    <message>
      <source>Beam lines</source>
      <translation>Trägerzüge</translation>
    </message>
    <message>
      <source>Beam lines from IFC: read, decided, balanced, posted</source>
      <translation>Trägerzüge aus IFC: gelesen, entschieden, ausgeglichen, eingetragen</translation>
    </message>
    <message>
      <source>Bearing</source>
      <translation>Auflager</translation>
    </message>
    <message>
      <source>Bearing width</source>
      <translation>Auflagerbreite</translation>
    </message>
    <message>
      <source>Becomes</source>
      <translation>Wird</translation>
    </message>
    <message>
      <source>Calculation sheet</source>
      <translation>Berechnungsblatt</translation>
    </message>
    <message>
      <source>Cancel</source>
      <translation>Abbrechen</translation>
    </message>
    <message>
      <source>Candidate</source>
      <translation>Kandidat</translation>
    </message>
    <message>
      <source>Carried by</source>
      <translation>Getragen von</translation>
    </message>
    <message>
      <source>Case</source>
      <translation>Lastfall</translation>
    </message>
    <message>
      <source>Case {case} is {nature}</source>
      <translation>Lastfall {case} ist {nature}</translation>
    </message>
    <message>
      <source>Change</source>
      <translation>Ändern</translation>
    </message>
    <message>
      <source>Change it</source>
      <translation>Ändern</translation>
    </message>
    <message>
      <source>Change the sections and materials in the model too</source>
      <translation>Auch Querschnitte und Baustoffe im Modell ändern</translation>
    </message>
    <message>
      <source>Changes</source>
      <translation>Änderungen</translation>
    </message>
    <message>
      <source>Checked by</source>
      <translation>Nachweis nach</translation>
    </message>
    <message>
      <source>Checking</source>
      <translation>Nachweisen</translation>
    </message>
    <message>
      <source>Choose a line in the list or in the 3D view.</source>
      <translation>Einen Trägerzug in der Liste oder in der 3D-Ansicht wählen.</translation>
    </message>
    <message>
      <source>Choose the line and look at the place in the 3D view</source>
      <translation>Den Trägerzug wählen und die Stelle in der 3D-Ansicht ansehen</translation>
    </message>
    <message>
      <source>Choose…</source>
      <translation>Wählen…</translation>
    </message>
    <message>
      <source>Choosing</source>
      <translation>Auswählen</translation>
    </message>
    <message>
      <source>Click a bearing, a span or an action to decide on it.</source>
      <translation>Ein Auflager, ein Feld oder eine Einwirkung anklicken, um darüber zu entscheiden.</translation>
    </message>
    <message>
      <source>Close</source>
      <translation>Schließen</translation>
    </message>
    <message>
      <source>Combination</source>
      <translation>Kombination</translation>
    </message>
    <message>
      <source>Combine by these</source>
      <translation>Danach kombinieren</translation>
    </message>
    <message>
      <source>Combined by {rules}</source>
      <translation>Kombiniert nach {rules}</translation>
    </message>
    <message>
      <source>Continuity</source>
      <translation>Stetigkeit</translation>
    </message>
    <message>
      <source>Deflection</source>
      <translation>Durchbiegung</translation>
    </message>
    <message>
      <source>Deflection limit</source>
      <translation>Durchbiegungsgrenze</translation>
    </message>
    <message>
      <source>Depth</source>
      <translation>Höhe</translation>
    </message>
    <message>
      <source>Distribution</source>
      <translation>Ausgleich</translation>
    </message>
    <message>
      <source>Distribution table</source>
      <translation>Ausgleichstafel</translation>
    </message>
    <message>
      <source>Done again</source>
      <translation>Wiederholt</translation>
    </message>
    <message>
      <source>Down</source>
      <translation>Abwärts</translation>
    </message>
    <message>
      <source>EI stated</source>
      <translation>EI angegeben</translation>
    </message>
    <message>
      <source>Earlier revision</source>
      <translation>Früherer Stand</translation>
    </message>
    <message>
      <source>Element</source>
      <translation>Bauteil</translation>
    </message>
    <message>
      <source>Element, line or GlobalId</source>
      <translation>Bauteil, Trägerzug oder GlobalId</translation>
    </message>
    <message>
      <source>Element, set, property</source>
      <translation>Bauteil, Satz, Merkmal</translation>
    </message>
    <message>
      <source>Elevation and curves of the chosen line</source>
      <translation>Ansicht und Linien des gewählten Trägerzugs</translation>
    </message>
    <message>
      <source>End</source>
      <translation>Ende</translation>
    </message>
    <message>
      <source>Envelope</source>
      <translation>Umhüllende</translation>
    </message>
    <message>
      <source>Envelope, combination or load case</source>
      <translation>Umhüllende, Kombination oder Lastfall</translation>
    </message>
    <message>
      <source>Enveloping</source>
      <translation>Umhüllen</translation>
    </message>
    <message>
      <source>Filter of the sections</source>
      <translation>Filter der Querschnitte</translation>
    </message>
    <message>
      <source>Find</source>
      <translation>Suchen</translation>
    </message>
    <message>
      <source>Find the lightest section that suffices</source>
      <translation>Den leichtesten ausreichenden Querschnitt suchen</translation>
    </message>
    <message>
      <source>Findings</source>
      <translation>Befunde</translation>
    </message>
    <message>
      <source>Findings ({count})</source>
      <translation>Befunde ({count})</translation>
    </message>
    <message>
      <source>For</source>
      <translation>Für</translation>
    </message>
    <message>
      <source>From</source>
      <translation>Von</translation>
    </message>
    <message>
      <source>Give the members another section or material</source>
      <translation>Den Stäben einen anderen Querschnitt oder Baustoff geben</translation>
    </message>
    <message>
      <source>Go to that line</source>
      <translation>Zu diesem Trägerzug gehen</translation>
    </message>
    <message>
      <source>Governed by</source>
      <translation>Maßgebend</translation>
    </message>
    <message>
      <source>HTML files (*.html)</source>
      <translation>HTML-Dateien (*.html)</translation>
    </message>
    <message>
      <source>Held</source>
      <translation>Gehalten</translation>
    </message>
    <message>
      <source>Hogging</source>
      <translation>Stützmoment</translation>
    </message>
    <message>
      <source>Hold it so</source>
      <translation>So halten</translation>
    </message>
    <message>
      <source>How far the support sinks</source>
      <translation>Wie weit sich die Stütze setzt</translation>
    </message>
    <message>
      <source>How lines are told apart in 3D</source>
      <translation>Wie Trägerzüge in 3D unterschieden werden</translation>
    </message>
    <message>
      <source>How the joint is held</source>
      <translation>Wie der Knoten gehalten ist</translation>
    </message>
    <message>
      <source>IFC models (*.ifc *.ifczip)</source>
      <translation>IFC-Modelle (*.ifc *.ifczip)</translation>
    </message>
    <message>
      <source>In the job file</source>
      <translation>In der Auftragsdatei</translation>
    </message>
    <message>
      <source>Independent check</source>
      <translation>Unabhängige Probe</translation>
    </message>
    <message>
      <source>Inertia</source>
      <translation>Trägheitsmoment</translation>
    </message>
    <message>
      <source>Is</source>
      <translation>Ist</translation>
    </message>
    <message>
      <source>It is of this nature</source>
      <translation>Er ist von dieser Art</translation>
    </message>
    <message>
      <source>Job files (*.yaml *.yml)</source>
      <translation>Auftragsdateien (*.yaml *.yml)</translation>
    </message>
    <message>
      <source>Join it so</source>
      <translation>So anschließen</translation>
    </message>
    <message>
      <source>Joined</source>
      <translation>Anschluss</translation>
    </message>
    <message>
      <source>Joint residual</source>
      <translation>Restmoment am Knoten</translation>
    </message>
    <message>
      <source>Joint {joint} of {mark} settles</source>
      <translation>Knoten {joint} von {mark} setzt sich</translation>
    </message>
    <message>
      <source>Joint {joint} of {mark}: {how}</source>
      <translation>Knoten {joint} von {mark}: {how}</translation>
    </message>
    <message>
      <source>Joint {number} of {mark}</source>
      <translation>Knoten {number} von {mark}</translation>
    </message>
    <message>
      <source>Joint {number}: {held}</source>
      <translation>Knoten {number}: {held}</translation>
    </message>
    <message>
      <source>Kind</source>
      <translation>Art</translation>
    </message>
    <message>
      <source>Kind of section</source>
      <translation>Art des Querschnitts</translation>
    </message>
    <message>
      <source>Kinds</source>
      <translation>Arten</translation>
    </message>
    <message>
      <source>Kinds of section to choose among</source>
      <translation>Arten von Querschnitten zur Auswahl</translation>
    </message>
    <message>
      <source>Largest</source>
      <translation>Größte</translation>
    </message>
    <message>
      <source>Largest reaction</source>
      <translation>Größte Auflagerkraft</translation>
    </message>
    <message>
      <source>Largest, {unit}</source>
      <translation>Größte, {unit}</translation>
    </message>
    <message>
      <source>Leg: {length}</source>
      <translation>Stiel: {length}</translation>
    </message>
    <message>
      <source>Length</source>
      <translation>Länge</translation>
    </message>
    <message>
      <source>Let it settle</source>
      <translation>Setzen lassen</translation>
    </message>
    <message>
      <source>Lightest section</source>
      <translation>Leichtester Querschnitt</translation>
    </message>
    <message>
      <source>Lightest sections: {names}</source>
      <translation>Leichteste Querschnitte: {names}</translation>
    </message>
    <message>
      <source>Lightest section…</source>
      <translation>Leichtester Querschnitt…</translation>
    </message>
    <message>
      <source>Line</source>
      <translation>Trägerzug</translation>
    </message>
    <message>
      <source>Line strip</source>
      <translation>Streifen des Trägerzugs</translation>
    </message>
    <message>
      <source>Line {mark}</source>
      <translation>Trägerzug {mark}</translation>
    </message>
    <message>
      <source>Lines</source>
      <translation>Trägerzüge</translation>
    </message>
    <message>
      <source>Lines by storey</source>
      <translation>Trägerzüge nach Geschoss</translation>
    </message>
    <message>
      <source>Lines that get one section</source>
      <translation>Trägerzüge, die einen gemeinsamen Querschnitt erhalten</translation>
    </message>
    <message>
      <source>Lines to choose for</source>
      <translation>Trägerzüge, für die gewählt wird</translation>
    </message>
    <message>
      <source>Load cases</source>
      <translation>Lastfälle</translation>
    </message>
    <message>
      <source>Mark, storey, state or GlobalId</source>
      <translation>Zeichen, Geschoss, Zustand oder GlobalId</translation>
    </message>
    <message>
      <source>Mass</source>
      <translation>Masse</translation>
    </message>
    <message>
      <source>Mass, kg/m</source>
      <translation>Masse, kg/m</translation>
    </message>
    <message>
      <source>Material</source>
      <translation>Baustoff</translation>
    </message>
    <message>
      <source>Members to change</source>
      <translation>Stäbe, die geändert werden</translation>
    </message>
    <message>
      <source>Method</source>
      <translation>Verfahren</translation>
    </message>
    <message>
      <source>Modulus</source>
      <translation>Elastizitätsmodul</translation>
    </message>
    <message>
      <source>Moment</source>
      <translation>Moment</translation>
    </message>
    <message>
      <source>Moment redistribution</source>
      <translation>Momentenumlagerung</translation>
    </message>
    <message>
      <source>Moments of {mark} redistributed</source>
      <translation>Momente von {mark} umgelagert</translation>
    </message>
    <message>
      <source>Name, kind or source</source>
      <translation>Name, Art oder Herkunft</translation>
    </message>
    <message>
      <source>Names</source>
      <translation>Namen</translation>
    </message>
    <message>
      <source>Names of sections</source>
      <translation>Namen von Querschnitten</translation>
    </message>
    <message>
      <source>Nature</source>
      <translation>Art</translation>
    </message>
    <message>
      <source>Next step</source>
      <translation>Nächster Schritt</translation>
    </message>
    <message>
      <source>No governing effect changed.</source>
      <translation>Keine maßgebende Größe hat sich geändert.</translation>
    </message>
    <message>
      <source>No storey</source>
      <translation>Ohne Geschoss</translation>
    </message>
    <message>
      <source>None of {count} suffices.</source>
      <translation>Keiner von {count} reicht aus.</translation>
    </message>
    <message>
      <source>None ticked: whatever is made of the material of the lines, as far as names and shapes tell</source>
      <translation>Nichts angekreuzt: alles, was aus dem Baustoff der Trägerzüge besteht, soweit Namen und Formen es sagen</translation>
    </message>
    <message>
      <source>Not analysed</source>
      <translation>Nicht berechnet</translation>
    </message>
    <message>
      <source>Not analysed, so not written: {lines}.</source>
      <translation>Nicht berechnet, daher nicht eingetragen: {lines}.</translation>
    </message>
    <message>
      <source>Nothing acts on {line} in {case}.</source>
      <translation>Auf {line} wirkt in {case} nichts.</translation>
    </message>
    <message>
      <source>Nothing lighter suffices; nothing would change.</source>
      <translation>Nichts Leichteres reicht aus; nichts würde sich ändern.</translation>
    </message>
    <message>
      <source>Nothing was tried: {reason}.</source>
      <translation>Nichts wurde versucht: {reason}.</translation>
    </message>
    <message>
      <source>Now</source>
      <translation>Jetzt</translation>
    </message>
    <message>
      <source>One more action</source>
      <translation>Noch eine Einwirkung</translation>
    </message>
    <message>
      <source>One more action on {mark}</source>
      <translation>Noch eine Einwirkung auf {mark}</translation>
    </message>
    <message>
      <source>One step back</source>
      <translation>Ein Schritt zurück</translation>
    </message>
    <message>
      <source>Only sections of these names; * stands for anything</source>
      <translation>Nur Querschnitte dieser Namen; * steht für Beliebiges</translation>
    </message>
    <message>
      <source>Open IFC model</source>
      <translation>IFC-Modell öffnen</translation>
    </message>
    <message>
      <source>Part</source>
      <translation>Anteil</translation>
    </message>
    <message>
      <source>Part of the support moments, 0 % for none</source>
      <translation>Anteil der Stützmomente, 0 % für keine</translation>
    </message>
    <message>
      <source>Place</source>
      <translation>Ort</translation>
    </message>
    <message>
      <source>Post</source>
      <translation>Eintragen</translation>
    </message>
    <message>
      <source>Post results</source>
      <translation>Ergebnisse eintragen</translation>
    </message>
    <message>
      <source>Post results into a copy</source>
      <translation>Ergebnisse in eine Kopie eintragen</translation>
    </message>
    <message>
      <source>Posted into '{target}': property sets {sets}.</source>
      <translation>In '{target}' eingetragen: Merkmalssätze {sets}.</translation>
    </message>
    <message>
      <source>Posting</source>
      <translation>Eintragen</translation>
    </message>
    <message>
      <source>Reaction moment</source>
      <translation>Einspannmoment</translation>
    </message>
    <message>
      <source>Reaction to the right</source>
      <translation>Auflagerkraft nach rechts</translation>
    </message>
    <message>
      <source>Reaction up</source>
      <translation>Auflagerkraft nach oben</translation>
    </message>
    <message>
      <source>Reactions</source>
      <translation>Auflagerkräfte</translation>
    </message>
    <message>
      <source>Reactions by supporting element</source>
      <translation>Auflagerkräfte nach tragendem Bauteil</translation>
    </message>
    <message>
      <source>Reading</source>
      <translation>Lesen</translation>
    </message>
    <message>
      <source>Reason</source>
      <translation>Grund</translation>
    </message>
    <message>
      <source>Reasons</source>
      <translation>Gründe</translation>
    </message>
    <message>
      <source>Redistribute</source>
      <translation>Umlagern</translation>
    </message>
    <message>
      <source>Restrained</source>
      <translation>Gehalten durch</translation>
    </message>
    <message>
      <source>Rotation</source>
      <translation>Verdrehung</translation>
    </message>
    <message>
      <source>Rule set</source>
      <translation>Regelsatz</translation>
    </message>
    <message>
      <source>Rules</source>
      <translation>Regeln</translation>
    </message>
    <message>
      <source>Rules of all lines</source>
      <translation>Regeln aller Trägerzüge</translation>
    </message>
    <message>
      <source>Sagging</source>
      <translation>Feldmoment</translation>
    </message>
    <message>
      <source>Section</source>
      <translation>Querschnitt</translation>
    </message>
    <message>
      <source>Section and material</source>
      <translation>Querschnitt und Baustoff</translation>
    </message>
    <message>
      <source>Section and material…</source>
      <translation>Querschnitt und Baustoff…</translation>
    </message>
    <message>
      <source>Section of {mark}</source>
      <translation>Querschnitt von {mark}</translation>
    </message>
    <message>
      <source>Sections and materials stay as the model has them:</source>
      <translation>Querschnitte und Baustoffe bleiben, wie das Modell sie hat:</translation>
    </message>
    <message>
      <source>Sections of other materials too</source>
      <translation>Auch Querschnitte aus anderen Baustoffen</translation>
    </message>
    <message>
      <source>Sections that change: {count}; {mass} kg less in all.</source>
      <translation>Geänderte Querschnitte: {count}; insgesamt {mass} kg weniger.</translation>
    </message>
    <message>
      <source>Sections that change: {count}; {mass} kg more in all.</source>
      <translation>Geänderte Querschnitte: {count}; insgesamt {mass} kg mehr.</translation>
    </message>
    <message>
      <source>Sections that were tried</source>
      <translation>Querschnitte, die versucht wurden</translation>
    </message>
    <message>
      <source>Sections to choose from</source>
      <translation>Querschnitte zur Auswahl</translation>
    </message>
    <message>
      <source>Sections to pick from</source>
      <translation>Querschnitte zum Auswählen</translation>
    </message>
    <message>
      <source>Settlement</source>
      <translation>Setzung</translation>
    </message>
    <message>
      <source>Severity</source>
      <translation>Gewicht</translation>
    </message>
    <message>
      <source>Severity, line, words or GlobalId</source>
      <translation>Gewicht, Trägerzug, Wörter oder GlobalId</translation>
    </message>
    <message>
      <source>Shape</source>
      <translation>Form</translation>
    </message>
    <message>
      <source>Shear</source>
      <translation>Querkraft</translation>
    </message>
    <message>
      <source>Show me</source>
      <translation>Zeigen</translation>
    </message>
    <message>
      <source>Show only lines with all of these words</source>
      <translation>Nur Trägerzüge mit allen diesen Wörtern zeigen</translation>
    </message>
    <message>
      <source>Show only sections of this kind</source>
      <translation>Nur Querschnitte dieser Art zeigen</translation>
    </message>
    <message>
      <source>Show only sections with all of these words</source>
      <translation>Nur Querschnitte mit all diesen Wörtern zeigen</translation>
    </message>
    <message>
      <source>Smallest reaction</source>
      <translation>Kleinste Auflagerkraft</translation>
    </message>
    <message>
      <source>Smallest, {unit}</source>
      <translation>Kleinste, {unit}</translation>
    </message>
    <message>
      <source>Solves the lines with the sections found; can be undone</source>
      <translation>Berechnet die Trägerzüge mit den gefundenen Querschnitten; lässt sich zurücknehmen</translation>
    </message>
    <message>
      <source>Solves the lines with them; can be undone</source>
      <translation>Berechnet die Trägerzüge damit; lässt sich zurücknehmen</translation>
    </message>
    <message>
      <source>Solving</source>
      <translation>Lösen</translation>
    </message>
    <message>
      <source>Something is still running; wait, or stop it.</source>
      <translation>Es läuft noch etwas; warten oder anhalten.</translation>
    </message>
    <message>
      <source>Something was decided since the search; seek the lightest section again.</source>
      <translation>Seit der Suche wurde etwas entschieden; bitte den leichtesten Querschnitt neu suchen.</translation>
    </message>
    <message>
      <source>Span {number} of {mark}</source>
      <translation>Feld {number} von {mark}</translation>
    </message>
    <message>
      <source>Span {number}: {length}</source>
      <translation>Feld {number}: {length}</translation>
    </message>
    <message>
      <source>Spanledger met something it does not handle ({kind}). Nothing was changed. Please report it with the model; the report view's log has more.</source>
      <translation>Spanledger ist auf etwas gestoßen, womit es nicht umgehen kann ({kind}). Nichts wurde geändert. Bitte mit dem Modell melden; das Protokoll im Berichtsfenster sagt mehr.</translation>
    </message>
    <message>
      <source>Spans</source>
      <translation>Felder</translation>
    </message>
    <message>
      <source>Spring</source>
      <translation>Feder</translation>
    </message>
    <message>
      <source>Start</source>
      <translation>Anfang</translation>
    </message>
    <message>
      <source>Start again</source>
      <translation>Von vorn</translation>
    </message>
    <message>
      <source>State</source>
      <translation>Zustand</translation>
    </message>
    <message>
      <source>Stiffness against turning: rigid, free, or a value</source>
      <translation>Steifigkeit gegen Verdrehen: rigid, free oder ein Wert</translation>
    </message>
    <message>
      <source>Stiffness upward: rigid, free, or 25 kN/mm say</source>
      <translation>Steifigkeit nach oben: rigid, free oder etwa 25 kN/mm</translation>
    </message>
    <message>
      <source>Stop</source>
      <translation>Anhalten</translation>
    </message>
    <message>
      <source>Stopped; nothing was changed.</source>
      <translation>Angehalten; nichts wurde geändert.</translation>
    </message>
    <message>
      <source>Storey</source>
      <translation>Geschoss</translation>
    </message>
    <message>
      <source>Take it out</source>
      <translation>Entfernen</translation>
    </message>
    <message>
      <source>Take these</source>
      <translation>Diese nehmen</translation>
    </message>
    <message>
      <source>Take this section</source>
      <translation>Diesen Querschnitt nehmen</translation>
    </message>
    <message>
      <source>Takes back what these members were given</source>
      <translation>Nimmt zurück, was diesen Stäben gegeben wurde</translation>
    </message>
    <message>
      <source>Takes the entry out of the job file, wherever it acts</source>
      <translation>Entfernt den Eintrag aus der Auftragsdatei, wo immer er wirkt</translation>
    </message>
    <message>
      <source>The calculation sheet is in '{path}'.</source>
      <translation>Das Berechnungsblatt steht in „{path}“.</translation>
    </message>
    <message>
      <source>The model does not fit into memory; close other work or split it.</source>
      <translation>Das Modell passt nicht in den Speicher; anderes schließen oder das Modell teilen.</translation>
    </message>
    <message>
      <source>The order in which joints are released</source>
      <translation>Die Reihenfolge, in der Knoten gelöst werden</translation>
    </message>
    <message>
      <source>The use of {lines} grows beyond 100 %.</source>
      <translation>Die Ausnutzung von {lines} steigt über 100 %.</translation>
    </message>
    <message>
      <source>This action comes from the model or its self weight; change it there, or add another one to the span.</source>
      <translation>Diese Einwirkung kommt aus dem Modell oder dem Eigengewicht; dort ändern oder dem Feld eine weitere geben.</translation>
    </message>
    <message>
      <source>This finding is about no line that is drawn.</source>
      <translation>Dieser Befund betrifft keinen gezeichneten Trägerzug.</translation>
    </message>
    <message>
      <source>This line is not analysed; its findings say why.</source>
      <translation>Dieser Trägerzug ist nicht berechnet; seine Befunde sagen, warum.</translation>
    </message>
    <message>
      <source>To</source>
      <translation>Bis</translation>
    </message>
    <message>
      <source>To the end</source>
      <translation>Zum Ende</translation>
    </message>
    <message>
      <source>Tries the sections from the lightest on; changes nothing</source>
      <translation>Versucht die Querschnitte vom leichtesten an; ändert nichts</translation>
    </message>
    <message>
      <source>Unchanged lines too</source>
      <translation>Auch unveränderte</translation>
    </message>
    <message>
      <source>Undone</source>
      <translation>Zurückgenommen</translation>
    </message>
    <message>
      <source>Use</source>
      <translation>Ausnutzung</translation>
    </message>
    <message>
      <source>Use a job file</source>
      <translation>Eine Auftragsdatei verwenden</translation>
    </message>
    <message>
      <source>Value</source>
      <translation>Wert</translation>
    </message>
    <message>
      <source>Verdict</source>
      <translation>Urteil</translation>
    </message>
    <message>
      <source>Verifying</source>
      <translation>Prüfen</translation>
    </message>
    <message>
      <source>Vertical</source>
      <translation>Lotrecht</translation>
    </message>
    <message>
      <source>What</source>
      <translation>Was</translation>
    </message>
    <message>
      <source>What is changed in the model</source>
      <translation>Was im Modell geändert wird</translation>
    </message>
    <message>
      <source>What it does to the lines</source>
      <translation>Was es bei den Trägerzügen bewirkt</translation>
    </message>
    <message>
      <source>What the 3D view shows along all lines</source>
      <translation>Was die 3D-Ansicht entlang aller Trägerzüge zeigt</translation>
    </message>
    <message>
      <source>What was found</source>
      <translation>Was gefunden wurde</translation>
    </message>
    <message>
      <source>Width</source>
      <translation>Breite</translation>
    </message>
    <message>
      <source>Writing</source>
      <translation>Schreiben</translation>
    </message>
    <message>
      <source>alike</source>
      <translation>gleich</translation>
    </message>
    <message>
      <source>all joints together</source>
      <translation>alle Knoten zugleich</translation>
    </message>
    <message>
      <source>all kinds</source>
      <translation>alle Arten</translation>
    </message>
    <message>
      <source>all lines, kind by kind</source>
      <translation>alle Trägerzüge, Art für Art</translation>
    </message>
    <message>
      <source>all names; or IPE*, HEA*</source>
      <translation>alle Namen; oder IPE*, HEA*</translation>
    </message>
    <message>
      <source>all states</source>
      <translation>alle Zustände</translation>
    </message>
    <message>
      <source>all {count} lines of {section}</source>
      <translation>alle {count} Trägerzüge aus {section}</translation>
    </message>
    <message>
      <source>as it is: {names}</source>
      <translation>wie es ist: {names}</translation>
    </message>
    <message>
      <source>axial force</source>
      <translation>Normalkraft</translation>
    </message>
    <message>
      <source>axial force and flexure</source>
      <translation>Normalkraft und Biegung</translation>
    </message>
    <message>
      <source>balanced</source>
      <translation>ausgeglichen</translation>
    </message>
    <message>
      <source>bearing {width} wide</source>
      <translation>Auflager {width} breit</translation>
    </message>
    <message>
      <source>becomes</source>
      <translation>wird</translation>
    </message>
    <message>
      <source>bending</source>
      <translation>Biegung</translation>
    </message>
    <message>
      <source>bending with axial force</source>
      <translation>Biegung mit Normalkraft</translation>
    </message>
    <message>
      <source>bending with shear</source>
      <translation>Biegung mit Querkraft</translation>
    </message>
    <message>
      <source>brought up to date</source>
      <translation>auf den Stand gebracht</translation>
    </message>
    <message>
      <source>buckling with bending</source>
      <translation>Knicken mit Biegung</translation>
    </message>
    <message>
      <source>by change</source>
      <translation>nach Änderung</translation>
    </message>
    <message>
      <source>by state</source>
      <translation>nach Zustand</translation>
    </message>
    <message>
      <source>by use</source>
      <translation>nach Ausnutzung</translation>
    </message>
    <message>
      <source>carried over</source>
      <translation>übertragen</translation>
    </message>
    <message>
      <source>carry-over factor</source>
      <translation>Übertragungsfaktor</translation>
    </message>
    <message>
      <source>changed</source>
      <translation>geändert</translation>
    </message>
    <message>
      <source>concrete resistance</source>
      <translation>Widerstand des Betons</translation>
    </message>
    <message>
      <source>concrete strength</source>
      <translation>Festigkeit des Betons</translation>
    </message>
    <message>
      <source>continuous</source>
      <translation>durchlaufend</translation>
    </message>
    <message>
      <source>curvature {value} mrad/m</source>
      <translation>Krümmung {value} mrad/m</translation>
    </message>
    <message>
      <source>dashed: before</source>
      <translation>gestrichelt: vorher</translation>
    </message>
    <message>
      <source>dashed: redistributed</source>
      <translation>gestrichelt: umgelagert</translation>
    </message>
    <message>
      <source>deflection</source>
      <translation>Durchbiegung</translation>
    </message>
    <message>
      <source>deflection limit</source>
      <translation>Durchbiegungsgrenze</translation>
    </message>
    <message>
      <source>depth</source>
      <translation>Höhe</translation>
    </message>
    <message>
      <source>differs by {part}</source>
      <translation>weicht um {part} ab</translation>
    </message>
    <message>
      <source>distribution factor</source>
      <translation>Verteilungszahl</translation>
    </message>
    <message>
      <source>element {element}</source>
      <translation>Bauteil {element}</translation>
    </message>
    <message>
      <source>error</source>
      <translation>Fehler</translation>
    </message>
    <message>
      <source>every second joint in turn</source>
      <translation>jeder zweite Knoten im Wechsel</translation>
    </message>
    <message>
      <source>exact</source>
      <translation>genau</translation>
    </message>
    <message>
      <source>fixed</source>
      <translation>eingespannt</translation>
    </message>
    <message>
      <source>fixed-end moment</source>
      <translation>Volleinspannmoment</translation>
    </message>
    <message>
      <source>flexure</source>
      <translation>Biegung</translation>
    </message>
    <message>
      <source>free</source>
      <translation>frei</translation>
    </message>
    <message>
      <source>gone</source>
      <translation>entfallen</translation>
    </message>
    <message>
      <source>guided</source>
      <translation>geführt</translation>
    </message>
    <message>
      <source>hinge</source>
      <translation>Gelenk</translation>
    </message>
    <message>
      <source>hogging</source>
      <translation>Stützmoment</translation>
    </message>
    <message>
      <source>hogging reinforcement</source>
      <translation>Bewehrung oben</translation>
    </message>
    <message>
      <source>imposed</source>
      <translation>Nutzlast</translation>
    </message>
    <message>
      <source>inertia</source>
      <translation>Trägheitsmoment</translation>
    </message>
    <message>
      <source>into a copy</source>
      <translation>in eine Kopie</translation>
    </message>
    <message>
      <source>into the model itself</source>
      <translation>in das Modell selbst</translation>
    </message>
    <message>
      <source>its end</source>
      <translation>sein Ende</translation>
    </message>
    <message>
      <source>its start</source>
      <translation>sein Anfang</translation>
    </message>
    <message>
      <source>job file</source>
      <translation>Auftragsdatei</translation>
    </message>
    <message>
      <source>largest reaction</source>
      <translation>größte Auflagerkraft</translation>
    </message>
    <message>
      <source>largest unbalance first</source>
      <translation>größtes Ungleichgewicht zuerst</translation>
    </message>
    <message>
      <source>lateral torsional buckling</source>
      <translation>Biegedrillknicken</translation>
    </message>
    <message>
      <source>lightest that suffices</source>
      <translation>leichtester, der ausreicht</translation>
    </message>
    <message>
      <source>line {mark}</source>
      <translation>Trägerzug {mark}</translation>
    </message>
    <message>
      <source>lines: {way}</source>
      <translation>Trägerzüge: {way}</translation>
    </message>
    <message>
      <source>mass</source>
      <translation>Masse</translation>
    </message>
    <message>
      <source>material {name}</source>
      <translation>Baustoff {name}</translation>
    </message>
    <message>
      <source>merged</source>
      <translation>vereinigt</translation>
    </message>
    <message>
      <source>model</source>
      <translation>Modell</translation>
    </message>
    <message>
      <source>moment</source>
      <translation>Moment</translation>
    </message>
    <message>
      <source>more than 20 %, or new</source>
      <translation>mehr als 20 % oder neu</translation>
    </message>
    <message>
      <source>more than all</source>
      <translation>übernutzt</translation>
    </message>
    <message>
      <source>moves down {by}</source>
      <translation>senkt sich um {by}</translation>
    </message>
    <message>
      <source>moves right {by}</source>
      <translation>rückt um {by} nach rechts</translation>
    </message>
    <message>
      <source>needs a decision</source>
      <translation>braucht eine Entscheidung</translation>
    </message>
    <message>
      <source>new</source>
      <translation>neu</translation>
    </message>
    <message>
      <source>no action here</source>
      <translation>hier wirkt nichts</translation>
    </message>
    <message>
      <source>no findings</source>
      <translation>keine Befunde</translation>
    </message>
    <message>
      <source>no support</source>
      <translation>kein Auflager</translation>
    </message>
    <message>
      <source>none</source>
      <translation>keine</translation>
    </message>
    <message>
      <source>not analysed</source>
      <translation>nicht berechnet</translation>
    </message>
    <message>
      <source>not checked</source>
      <translation>nicht nachgewiesen</translation>
    </message>
    <message>
      <source>not checked: {reason}</source>
      <translation>nicht nachgewiesen: {reason}</translation>
    </message>
    <message>
      <source>note</source>
      <translation>Hinweis</translation>
    </message>
    <message>
      <source>nothing acts</source>
      <translation>nichts wirkt</translation>
    </message>
    <message>
      <source>nothing to check</source>
      <translation>nichts nachzuweisen</translation>
    </message>
    <message>
      <source>other</source>
      <translation>sonstige</translation>
    </message>
    <message>
      <source>permanent</source>
      <translation>ständig</translation>
    </message>
    <message>
      <source>pinned</source>
      <translation>gelenkig</translation>
    </message>
    <message>
      <source>point</source>
      <translation>Einzellast</translation>
    </message>
    <message>
      <source>posted</source>
      <translation>eingetragen</translation>
    </message>
    <message>
      <source>profiles of the model ({count})</source>
      <translation>Profile des Modells ({count})</translation>
    </message>
    <message>
      <source>profiles that FreeCAD has ({count})</source>
      <translation>Profile, die FreeCAD hat ({count})</translation>
    </message>
    <message>
      <source>ready</source>
      <translation>bereit</translation>
    </message>
    <message>
      <source>redistribution</source>
      <translation>Umlagerung</translation>
    </message>
    <message>
      <source>regrouped</source>
      <translation>umgruppiert</translation>
    </message>
    <message>
      <source>resistance</source>
      <translation>Widerstand</translation>
    </message>
    <message>
      <source>sagging</source>
      <translation>Feldmoment</translation>
    </message>
    <message>
      <source>sagging reinforcement</source>
      <translation>Bewehrung unten</translation>
    </message>
    <message>
      <source>section table of the job file ({count})</source>
      <translation>Querschnittstafel der Auftragsdatei ({count})</translation>
    </message>
    <message>
      <source>section {name}</source>
      <translation>Querschnitt {name}</translation>
    </message>
    <message>
      <source>serviceability</source>
      <translation>Gebrauchstauglichkeit</translation>
    </message>
    <message>
      <source>settlement</source>
      <translation>Setzung</translation>
    </message>
    <message>
      <source>shear</source>
      <translation>Querkraft</translation>
    </message>
    <message>
      <source>smallest reaction</source>
      <translation>kleinste Auflagerkraft</translation>
    </message>
    <message>
      <source>snow</source>
      <translation>Schnee</translation>
    </message>
    <message>
      <source>span over depth</source>
      <translation>Biegeschlankheit</translation>
    </message>
    <message>
      <source>span {number} of {mark}</source>
      <translation>Feld {number} von {mark}</translation>
    </message>
    <message>
      <source>split</source>
      <translation>geteilt</translation>
    </message>
    <message>
      <source>spring</source>
      <translation>Feder</translation>
    </message>
    <message>
      <source>stale</source>
      <translation>überholt</translation>
    </message>
    <message>
      <source>stays, though it may no longer fit</source>
      <translation>bleibt, auch wenn es nicht mehr passen mag</translation>
    </message>
    <message>
      <source>steel resistance</source>
      <translation>Widerstand des Stahls</translation>
    </message>
    <message>
      <source>steel strength</source>
      <translation>Festigkeit des Stahls</translation>
    </message>
    <message>
      <source>strength</source>
      <translation>Tragfähigkeit</translation>
    </message>
    <message>
      <source>sum</source>
      <translation>Summe</translation>
    </message>
    <message>
      <source>temperature</source>
      <translation>Temperatur</translation>
    </message>
    <message>
      <source>timber resistance</source>
      <translation>Widerstand des Holzes</translation>
    </message>
    <message>
      <source>too weak</source>
      <translation>zu schwach</translation>
    </message>
    <message>
      <source>turns {by}</source>
      <translation>verdreht sich um {by}</translation>
    </message>
    <message>
      <source>unchanged</source>
      <translation>unverändert</translation>
    </message>
    <message>
      <source>uniform</source>
      <translation>Gleichlast</translation>
    </message>
    <message>
      <source>up to 20 %</source>
      <translation>bis 20 %</translation>
    </message>
    <message>
      <source>up to 5 %</source>
      <translation>bis 5 %</translation>
    </message>
    <message>
      <source>up to 80 % used</source>
      <translation>bis 80 % genutzt</translation>
    </message>
    <message>
      <source>up to all used</source>
      <translation>bis ganz genutzt</translation>
    </message>
    <message>
      <source>up to half used</source>
      <translation>bis zur Hälfte genutzt</translation>
    </message>
    <message>
      <source>warning</source>
      <translation>Warnung</translation>
    </message>
    <message>
      <source>wind</source>
      <translation>Wind</translation>
    </message>
    <message>
      <source>with known ends set</source>
      <translation>mit bekannten Enden</translation>
    </message>
    <message>
      <source>written</source>
      <translation>geschrieben</translation>
    </message>
    <message>
      <source>{before} to {after}: {changed} of {all} lines changed; {again} solved again.</source>
      <translation>{before} zu {after}: {changed} von {all} Trägerzügen geändert; {again} neu gelöst.</translation>
    </message>
    <message>
      <source>{count} error</source>
      <translation>{count} Fehler</translation>
    </message>
    <message>
      <source>{count} errors</source>
      <translation>{count} Fehler</translation>
    </message>
    <message>
      <source>{count} more</source>
      <translation>{count} weitere</translation>
    </message>
    <message>
      <source>{count} note</source>
      <translation>{count} Hinweis</translation>
    </message>
    <message>
      <source>{count} notes</source>
      <translation>{count} Hinweise</translation>
    </message>
    <message>
      <source>{count} of another material were left out.</source>
      <translation>{count} aus anderem Baustoff blieben außer Betracht.</translation>
    </message>
    <message>
      <source>{count} other lines changed: {lines}.</source>
      <translation>{count} weitere Trägerzüge geändert: {lines}.</translation>
    </message>
    <message>
      <source>{count} positions</source>
      <translation>{count} Stellen</translation>
    </message>
    <message>
      <source>{count} spans</source>
      <translation>{count} Felder</translation>
    </message>
    <message>
      <source>{count} warning</source>
      <translation>{count} Warnung</translation>
    </message>
    <message>
      <source>{count} warnings</source>
      <translation>{count} Warnungen</translation>
    </message>
    <message>
      <source>{force} to the right</source>
      <translation>{force} nach rechts</translation>
    </message>
    <message>
      <source>{length} along the line</source>
      <translation>{length} entlang des Trägerzugs</translation>
    </message>
    <message>
      <source>{limit_state} envelope</source>
      <translation>Umhüllende {limit_state}</translation>
    </message>
    <message>
      <source>{lines} lines: property sets on {members} members and {supports} supporting elements.</source>
      <translation>{lines} Trägerzüge: Merkmalssätze an {members} Stäben und {supports} tragenden Bauteilen.</translation>
    </message>
    <message>
      <source>{members} as modelled</source>
      <translation>{members} wie im Modell</translation>
    </message>
    <message>
      <source>{names} for {members}</source>
      <translation>{names} für {members}</translation>
    </message>
    <message>
      <source>{new} in place of {old}: {after} instead of {before} kg/m over {length} m.</source>
      <translation>{new} statt {old}: {after} statt {before} kg/m auf {length} m.</translation>
    </message>
    <message>
      <source>{section} stays: nothing lighter suffices.</source>
      <translation>{section} bleibt: nichts Leichteres reicht aus.</translation>
    </message>
    <message>
      <source>{shown} of {total} lines</source>
      <translation>{shown} von {total} Trägerzügen</translation>
    </message>
    <message>
      <source>{shown} of {total} sections</source>
      <translation>{shown} von {total} Querschnitten</translation>
    </message>
    <message>
      <source>{side} of span {member} of {mark}: {how}</source>
      <translation>{side} von Feld {member} von {mark}: {how}</translation>
    </message>
    <message>
      <source>{words}; the first {most} are listed</source>
      <translation>{words}; die ersten {most} sind aufgeführt</translation>
    </message>
    <message>
      <source>↑ {line} at {place}</source>
      <translation>↑ {line} bei {place}</translation>
    </message>
    <message>
      <source>↓ on {line}</source>
      <translation>↓ auf {line}</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Balance</name>
    <message>
      <source>Balance lines</source>
      <translation>Trägerzüge ausgleichen</translation>
    </message>
    <message>
      <source>Read the model and its job file again and balance all lines</source>
      <translation>Das Modell und seine Auftragsdatei neu lesen und alle Trägerzüge ausgleichen</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Building</name>
    <message>
      <source>Show or hide the building</source>
      <translation>Gebäude zeigen oder verbergen</translation>
    </message>
    <message>
      <source>Show the bodies of the building faintly behind its lines, or hide them</source>
      <translation>Die Körper des Gebäudes blass hinter den Trägerzügen zeigen oder verbergen</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Compare</name>
    <message>
      <source>Compare with earlier revision…</source>
      <translation>Mit früherem Stand vergleichen…</translation>
    </message>
    <message>
      <source>Show what changed since an earlier revision of the model, line by line</source>
      <translation>Zeigen, was sich seit einem früheren Stand des Modells geändert hat, Trägerzug für Trägerzug</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Desk</name>
    <message>
      <source>Show or hide the desk</source>
      <translation>Arbeitsplatz zeigen oder verbergen</translation>
    </message>
    <message>
      <source>Show or hide the list of lines and the strip</source>
      <translation>Die Liste der Trägerzüge und den Streifen zeigen oder verbergen</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Job</name>
    <message>
      <source>Take the decisions for the open model from another job file</source>
      <translation>Die Entscheidungen für das offene Modell aus einer anderen Auftragsdatei nehmen</translation>
    </message>
    <message>
      <source>Use job file…</source>
      <translation>Auftragsdatei verwenden…</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Lightest</name>
    <message>
      <source>Find the lightest section that suffices, and see first what it does</source>
      <translation>Den leichtesten ausreichenden Querschnitt suchen und vorher sehen, was er bewirkt</translation>
    </message>
    <message>
      <source>Lightest section…</source>
      <translation>Leichtester Querschnitt…</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Open</name>
    <message>
      <source>Open IFC model…</source>
      <translation>IFC-Modell öffnen…</translation>
    </message>
    <message>
      <source>Read beams, supports and actions from an IFC file and balance its lines</source>
      <translation>Träger, Auflager und Einwirkungen aus einer IFC-Datei lesen und die Trägerzüge ausgleichen</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Post</name>
    <message>
      <source>Post results…</source>
      <translation>Ergebnisse eintragen…</translation>
    </message>
    <message>
      <source>Write the results into a copy of the model as property sets</source>
      <translation>Die Ergebnisse als Merkmalssätze in eine Kopie des Modells schreiben</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Redo</name>
    <message>
      <source>Redo decision</source>
      <translation>Entscheidung wiederholen</translation>
    </message>
    <message>
      <source>Take the decision again that was undone last</source>
      <translation>Die zuletzt zurückgenommene Entscheidung wieder treffen</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Section</name>
    <message>
      <source>Give the chosen line or span another section or material</source>
      <translation>Dem gewählten Trägerzug oder Feld einen anderen Querschnitt oder Baustoff geben</translation>
    </message>
    <message>
      <source>Section and material…</source>
      <translation>Querschnitt und Baustoff…</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Sheet</name>
    <message>
      <source>Calculation sheet…</source>
      <translation>Berechnungsblatt…</translation>
    </message>
    <message>
      <source>Write the calculation sheet, checks of the members included, as one HTML file</source>
      <translation>Das Berechnungsblatt mit den Nachweisen der Stäbe als eine HTML-Datei schreiben</translation>
    </message>
  </context>
  <context>
    <name>Spanledger_Undo</name>
    <message>
      <source>Take the last decision back and balance again</source>
      <translation>Die letzte Entscheidung zurücknehmen und neu ausgleichen</translation>
    </message>
    <message>
      <source>Undo decision</source>
      <translation>Entscheidung zurücknehmen</translation>
    </message>
  </context>
  <context>
    <name>Workbench</name>
    <message>
      <source>Spanledger</source>
      <translation>Spanledger</translation>
    </message>
  </context>
</TS>
