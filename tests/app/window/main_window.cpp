// SPDX-License-Identifier: GPL-3.0-or-later
#include <QAbstractItemModelTester>
#include <QAccessible>
#include <QDir>
#include <QSettings>
#include <QStyleFactory>

#include "app/window/ink.hpp"
#include "engine/words/words.hpp"
#include "tests/app/window/support.hpp"

using namespace binwright;

TEST_CASE("raising the output from 15 V to 22 V rejects a 25 V lot and says by how much", "[app][window]") {
    DemoWindow demo;
    named<CircuitStrip>(*demo.window, "circuit_strip")->choose(Seat::output_capacitor);
    demo.settle();
    const Candidate* before = demo.candidate("114-Z");
    REQUIRE(before != nullptr);
    CHECK(before->report.verdict == Verdict::holds);
    CHECK(named<QLabel>(*demo.window, "summary")->text() == "9–15 V out, 0.1–2.5 A: every part holds.");

    demo.enter("output_voltage_highest", "22 V");
    CHECK(named<QLabel>(*demo.window, "output_voltage_was")->text() == "was 9 V … 15 V");
    demo.settle();
    const Candidate* after = demo.candidate("114-Z");
    REQUIRE(after != nullptr);
    CHECK(after->report.verdict == Verdict::rejected);
    const Wording text = words(after->report.findings.front());
    // 22 V and half of its ripple (cold, 0.3 V) across 25 V under an 80 % rule: 20 V allowed (common practice, no source).
    CHECK(text.line.starts_with("22.2 V across a 25 V part (89 %); the rule allows 20.0 V: 2.2 V too much"));
    CHECK(text.mend.find("a 35 V part or higher") != std::string::npos);
    CHECK(named<QLabel>(*demo.window, "summary")->text().contains("rejected"));
    CHECK(named<CircuitStrip>(*demo.window, "circuit_strip")->tag_text(Seat::output_capacitor).contains("rejected"));

    QTest::mouseClick(named<QPushButton>(*demo.window, "drop"), Qt::LeftButton);
    demo.settle();
    CHECK(demo.candidate("114-Z")->report.verdict == Verdict::holds);
    CHECK_FALSE(demo.window->document().unsaved());
}

TEST_CASE("a value that cannot be read is refused where it stands and changes nothing", "[app][window]") {
    DemoWindow demo;
    demo.enter("output_voltage_highest", "15 A");
    CHECK(named<QLabel>(*demo.window, "operating_trouble")->text() == "output voltage: \"A\" is a current, not a voltage");
    CHECK_FALSE(demo.window->document().unsaved());
    demo.enter("output_voltage_highest", "5 V");
    CHECK(named<QLabel>(*demo.window, "operating_trouble")->text() == "output voltage: the lowest, 9 V, is above the highest, 5 V");
    demo.settle();
}

TEST_CASE("saving keeps every comment and line but the changed one", "[app][window]") {
    DemoWindow demo;
    const std::string before = slurp(demo.path);
    demo.enter("output_voltage_highest", "18 V");
    CHECK(demo.window->isWindowModified());
    REQUIRE(demo.window->save());
    const std::string after = slurp(demo.path);
    std::istringstream old_text(before), new_text(after);
    int different = 0;
    for (std::string a, b; std::getline(old_text, a) && std::getline(new_text, b);) {
        if (a == b) continue;
        ++different;
        CHECK(a == "output_voltage   = [\"9 V\", \"15 V\"]      # set by the trimmer");
        CHECK(b == "output_voltage   = [\"9 V\", \"18 V\"]      # set by the trimmer");
    }
    CHECK(different == 1);
    CHECK_FALSE(demo.window->isWindowModified());
    demo.settle();
}

TEST_CASE("closing asks about unsaved changes and stays when told to", "[app][window]") {
    DemoWindow demo;
    demo.enter("output_voltage_highest", "18 V");
    demo.answers.unsaved_answers = {Ask::Unsaved::stay, Ask::Unsaved::save};
    CHECK_FALSE(demo.window->close());
    CHECK(demo.window->close());
    CHECK(slurp(demo.path).find("[\"9 V\", \"18 V\"]") != std::string::npos);
}

TEST_CASE("a faulty file is not opened and every fault is told with its place", "[app][window]") {
    DemoWindow demo;
    demo.answers.tell_expected = true;
    demo.window->open(QString(BINWRIGHT_SOURCE) + "/tests/broken/converter-ten-faults.toml");
    REQUIRE(demo.answers.told.size() == 1);
    CHECK(demo.answers.told.front().count('\n') >= 9);
    CHECK(demo.answers.told.front().contains(":3:1: unknown key `titel`; did you mean `title`?"));
    CHECK(demo.window->document().path == demo.path);
    demo.settle();
}

TEST_CASE("five questions make a new converter that is judged at once", "[app][window]") {
    DemoWindow demo;
    on_dialog("new_form", [](QDialog& form) {
        form.findChild<QComboBox*>("topology")->setCurrentText("boost");
        form.findChild<QLineEdit*>("output")->setText("24");
        QTest::mouseClick(form.findChild<QPushButton*>("ok"), Qt::LeftButton);
        CHECK(form.isVisible());  // 24 of what?
        CHECK(form.findChild<QLabel*>("output_trouble")->text().startsWith("24 has no unit. Write 24 V."));
        form.findChild<QLineEdit*>("output")->setText("24 V");
        form.findChild<QLineEdit*>("title")->setText("Lamp");
        QTest::mouseClick(form.findChild<QPushButton*>("ok"), Qt::LeftButton);
    });
    demo.window->new_converter();
    CHECK(demo.window->document().converter.topology->name == "boost");
    CHECK(demo.window->document().converter.title == "Lamp");
    CHECK(demo.window->document().path.empty());
    demo.settle();
    CHECK(demo.window->judgement()->report.verdict == Verdict::unproven);
    demo.answers.unsaved_answers = {Ask::Unsaved::discard};
    demo.window->close();
}

TEST_CASE("the bin page adds measures and takes back", "[app][window][bin]") {
    DemoWindow demo;
    auto* page = named<BinPage>(*demo.window, "bin_page");
    auto* table = named<QTableView>(*demo.window, "bin_lots");
    const int before = page->model()->rowCount();
    on_dialog("add_lot", [](QDialog& form) {
        form.findChild<QComboBox*>("part")->setCurrentText("Aluminium of the lighthouse 25 V");
        form.findChild<QLineEdit*>("count")->setText("x");
        form.findChild<QLineEdit*>("figures")->setText("U_R = 25 V; C = 470 µF; ESR = 60");
        QTest::mouseClick(form.findChild<QPushButton*>("ok"), Qt::LeftButton);
        CHECK(form.findChild<QLabel*>("count_trouble")->text() == "\"x\" is no whole number from 0 up");
        CHECK(form.findChild<QLabel*>("figures_trouble")->text().contains("60 has no unit, and ESR needs one."));
        form.findChild<QLineEdit*>("count")->setText("4");
        form.findChild<QLineEdit*>("figures")->setText("U_R = 25 V; C = 470 µF; ESR = 60 mΩ @ 100 kHz");
        QTest::mouseClick(form.findChild<QPushButton*>("ok"), Qt::LeftButton);
    });
    page->add();
    REQUIRE(page->model()->rowCount() == before + 1);
    table->selectRow(before);
    on_dialog("measure_lot", [](QDialog& form) {
        form.findChild<QLineEdit*>("reading")->setText("58 mΩ @ 100 kHz");
        QTest::mouseClick(form.findChild<QPushButton*>("ok"), Qt::LeftButton);
    });
    page->measure();
    CHECK(named<QTextBrowser>(*demo.window, "lot_sheet")->toPlainText().contains("58 mΩ"));
    page->undo();
    page->undo();
    CHECK(page->model()->rowCount() == before);
    CHECK(demo.window->store().history().size() == 3);
    demo.settle();
}

TEST_CASE("what was open and chosen is there again after a restart", "[app][window]") {
    QTemporaryDir settings;
    QSettings::setDefaultFormat(QSettings::IniFormat);
    QSettings::setPath(QSettings::IniFormat, QSettings::UserScope, settings.path());
    const DemoWindow demo;  // only for its copy of the file
    const std::string bin = settings.filePath("bin.sqlite").toStdString();
    Answers answers;
    {
        MainWindow first(WindowStart{demo.path, bin, false}, answers);
        first.resize(1111, 777);
        first.show();
        named<CircuitStrip>(first, "circuit_strip")->choose(Seat::rectifier);
        CHECK(first.close());
    }
    MainWindow second(WindowStart{"", bin, false}, answers);
    second.show();
    CHECK(second.document().path == demo.path);
    CHECK(named<QLabel>(second, "seat_title")->text().startsWith("D1: rectifier"));
    CHECK(second.size() == QSize(1111, 777));
    second.close();
}

TEST_CASE("a ranking that is cancelled leaves no verdict on show", "[app][window]") {
    DemoWindow demo;
    demo.settle();
    named<CircuitStrip>(*demo.window, "circuit_strip")->choose(Seat::rectifier);
    named<CircuitStrip>(*demo.window, "circuit_strip")->choose(Seat::output_capacitor);
    auto* cancel = named<QPushButton>(*demo.window, "rank_cancel");
    CHECK(cancel->text() == "&Cancel");
    QTest::mouseClick(cancel, Qt::LeftButton);
    CHECK(cancel->text() == "&Rank again");
    demo.settle();
    auto* lots = named<SeatSheet>(*demo.window, "seat_sheet")->model();
    for (int row = 0; row < lots->rowCount(); ++row) CHECK(lots->index(row, CandidateModel::verdict).data().toString() == "not judged");
    QTest::mouseClick(cancel, Qt::LeftButton);
    demo.settle();
    CHECK(demo.candidate("114-Z")->report.verdict == Verdict::holds);
}

TEST_CASE("Enter on a lot tries it in the seat and dropping the trial takes it out", "[app][window]") {
    DemoWindow demo;
    demo.settle();
    auto* table = named<QTableView>(*demo.window, "ranked_lots");
    auto* lots = named<SeatSheet>(*demo.window, "seat_sheet")->model();
    lots->search("112-X");
    table->selectRow(0);
    QTest::keyClick(table, Qt::Key_Return);
    demo.settle();
    CHECK(named<QLabel>(*demo.window, "seat_title")->text().startsWith("C3: output capacitor, 112-X"));
    CHECK(demo.window->judgement()->report.verdict == Verdict::rejected);  // 15 V across 16 V
    QTest::mouseClick(named<QPushButton>(*demo.window, "drop"), Qt::LeftButton);
    demo.settle();
    CHECK(named<QLabel>(*demo.window, "seat_title")->text().startsWith("C3: output capacitor, 103-M"));
    CHECK(demo.window->judgement()->report.verdict == Verdict::holds);
    CHECK_FALSE(demo.window->document().unsaved());
}

TEST_CASE("the tables keep to the rules of models", "[app][window]") {
    DemoWindow demo;
    demo.settle();
    auto* lots = named<SeatSheet>(*demo.window, "seat_sheet")->model();
    QAbstractItemModelTester first(lots, QAbstractItemModelTester::FailureReportingMode::Fatal);
    auto* bin = named<BinPage>(*demo.window, "bin_page")->model();
    QAbstractItemModelTester second(bin, QAbstractItemModelTester::FailureReportingMode::Fatal);
    lots->sort(CandidateModel::part, Qt::DescendingOrder);
    lots->search("film");
    for (int row = 0; row < lots->rowCount(); ++row) CHECK(lots->candidate(lots->index(row, 0))->lot.part.name.find("Film") != std::string::npos);
    CHECK(lots->rowCount() == 3);
    bin->search("pulled schottky");
    CHECK(bin->rowCount() > 0);
    bin->sort(BinModel::pieces, Qt::AscendingOrder);
}

TEST_CASE("everything that takes the keyboard has a name for a reader", "[app][window][accessible]") {
    DemoWindow demo;
    demo.settle();
    for (QWidget* widget : demo.window->findChildren<QWidget*>()) {
        if (widget->focusPolicy() == Qt::NoFocus || !widget->isVisibleTo(demo.window.get()) || widget->objectName().startsWith("qt_")) continue;
        QAccessibleInterface* spoken = QAccessible::queryAccessibleInterface(widget);
        INFO(widget->metaObject()->className() << " " << widget->objectName().toStdString());
        REQUIRE(spoken != nullptr);
        const bool inner = qobject_cast<QTabBar*>(widget) || widget->inherits("QTabWidget") || widget->inherits("QHeaderView") || widget->inherits("QSplitter");
        CHECK((inner || !spoken->text(QAccessible::Name).isEmpty()));
    }
}

TEST_CASE("every topology is drawn with a tag at each of its seats", "[app][window]") {
    QTemporaryDir folder;
    const QByteArray wanted = qgetenv("BINWRIGHT_SCREENSHOTS");
    Answers answers;
    for (const Topology& topology : topologies()) {
        INFO(topology.name);
        const std::string path = folder.filePath("one.toml").toStdString();
        NewConverter asked{"drawn", {10, 15}, {12, 12}, {0.1, 1}, 100e3};
        if (topology.name == "buck") asked.output_voltage = {5, 5};
        if (topology.name == "boost") asked.output_voltage = {24, 24};
        std::ofstream(path) << new_converter_text(topology, asked);
        MainWindow window(WindowStart{path, "", true}, answers, false);
        window.resize(1280, 720);
        window.show();
        REQUIRE(QTest::qWaitFor([&] { return !window.busy(); }, 120000));
        REQUIRE(window.judgement() != nullptr);
        auto* strip = named<CircuitStrip>(window, "circuit_strip");
        for (const Branch& branch : topology.branches)
            if (branch.seat) CHECK(strip->accessibleDescription().contains(qt(window.document().converter.reference(*branch.seat))));
        if (!wanted.isEmpty()) CHECK(strip->grab().save(QString::fromLocal8Bit(wanted) + "/drawn-" + qt(topology.name) + ".png"));
    }
}

TEST_CASE("pictures of the window in light and dark", "[app][window][pictures]") {
    const QByteArray wanted = qgetenv("BINWRIGHT_SCREENSHOTS");
    const QTemporaryDir unwanted;
    const QString folder = wanted.isEmpty() ? unwanted.path() : QString::fromLocal8Bit(wanted);
    QDir().mkpath(folder);
    const QPalette light = QApplication::palette();
    QPalette dark;
    dark.setColor(QPalette::Window, QColor(0x20, 0x22, 0x25));
    dark.setColor(QPalette::Base, QColor(0x18, 0x1a, 0x1c));
    dark.setColor(QPalette::AlternateBase, QColor(0x22, 0x25, 0x28));
    dark.setColor(QPalette::Button, QColor(0x2c, 0x2f, 0x33));
    for (const auto role : {QPalette::WindowText, QPalette::Text, QPalette::ButtonText, QPalette::ToolTipText}) dark.setColor(role, QColor(0xe6, 0xe4, 0xde));
    dark.setColor(QPalette::PlaceholderText, QColor(0x90, 0x90, 0x90));
    dark.setColor(QPalette::Highlight, QColor(0x3a, 0x5f, 0x86));
    dark.setColor(QPalette::HighlightedText, Qt::white);
    dark.setColor(QPalette::Light, QColor(0x3a, 0x3e, 0x42));
    dark.setColor(QPalette::Mid, QColor(0x12, 0x13, 0x15));
    dark.setColor(QPalette::Dark, QColor(0x0c, 0x0d, 0x0e));
    QApplication::setStyle(QStyleFactory::create("Fusion"));
    for (const auto& [name, palette] : {std::pair<QString, QPalette>{"light", light}, {"dark", dark}}) {
        QApplication::setPalette(palette);
        DemoWindow demo;
        demo.window->resize(name == "light" ? QSize(1280, 720) : QSize(1600, 1000));
        demo.settle();
        demo.enter("output_voltage_highest", "18 V");
        demo.settle();
        CHECK(demo.window->grab().save(folder + "/converter-" + name + ".png"));
        named<QTabWidget>(*demo.window, "pages")->setCurrentIndex(1);
        named<QTableView>(*demo.window, "bin_lots")->selectRow(5);
        QTest::qWait(50);
        CHECK(demo.window->grab().save(folder + "/bin-" + name + ".png"));
        const auto photograph = [&](const QString& dialog) {
            on_dialog(dialog, [&](QDialog& form) {
                QTest::qWait(50);
                CHECK(form.grab().save(folder + "/" + dialog + "-" + name + ".png"));
                QTest::mouseClick(form.findChild<QPushButton*>("cancel"), Qt::LeftButton);
            });
        };
        auto* page = named<BinPage>(*demo.window, "bin_page");
        photograph("add_lot");
        page->add();
        photograph("measure_lot");
        page->measure();
        demo.answers.unsaved_answers = {Ask::Unsaved::discard};
        photograph("new_form");
        demo.window->new_converter();
    }
    QApplication::setPalette(light);
}
