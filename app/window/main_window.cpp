// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/main_window.hpp"

#include <QAction>
#include <QCloseEvent>
#include <QDragEnterEvent>
#include <QFileInfo>
#include <QMenuBar>
#include <QMimeData>
#include <QSettings>
#include <QStatusBar>
#include <QVBoxLayout>

#include "app/window/form.hpp"
#include "app/window/ink.hpp"
#include "engine/words/words.hpp"
#include "import/starter.hpp"

namespace binwright {

MainWindow::MainWindow(const WindowStart& start, Ask& ask, bool settings) : ask_(ask), settings_(settings) {
    setObjectName("main_window");
    setAcceptDrops(true);
    resize(1280, 800);
    pages_ = new QTabWidget(this);
    pages_->setObjectName("pages");
    pages_->setAccessibleName("Pages");
    pages_->setDocumentMode(true);
    setCentralWidget(pages_);
    auto* converter = new QWidget(pages_);
    auto* column = new QVBoxLayout(converter);
    column->setContentsMargins(0, 0, 0, 0);
    column->setSpacing(0);
    line_ = new OperatingLine(converter);
    strip_ = new CircuitStrip(converter);
    sheet_ = new SeatSheet(converter);
    column->addWidget(line_);
    column->addWidget(strip_);
    column->addWidget(sheet_, 1);
    for (QWidget* paper : {static_cast<QWidget*>(line_), static_cast<QWidget*>(sheet_)}) {
        paper->setBackgroundRole(QPalette::Base);
        paper->setAutoFillBackground(true);
    }
    pages_->addTab(converter, "&Converter");
    bin_ = new BinPage(ask_, pages_);
    pages_->addTab(bin_, "&Bin");
    make_menus();

    connect(line_, &OperatingLine::changed, this, &MainWindow::change_value);
    connect(line_, &OperatingLine::keep_wanted, this, [this] {
        keep(document_);
        kept_ = judgement_;
        show_document();
        judge_again();
    });
    connect(line_, &OperatingLine::drop_wanted, this, [this] {
        drop(document_);
        show_document();
        judge_again();
    });
    connect(strip_, &CircuitStrip::seat_chosen, this, [this](Seat seat) {
        seat_ = seat;
        sheet_->show_seat(document_.converter, seat_, judgement_.get(), document_.on_trial() ? kept_.get() : nullptr);
        rank_again();
    });
    connect(sheet_, &SeatSheet::cancel_wanted, this, [this] {
        judge_.cancel_rank();
        sheet_->show_progress(1);
        sheet_->withhold("not judged");
    });
    connect(sheet_, &SeatSheet::rank_wanted, this, &MainWindow::rank_again);
    connect(sheet_, &SeatSheet::fit_wanted, this, [this](const QString& label) { change_value(QString("seat.%1.fitted").arg(qt(to_string(seat_))), label); });
    connect(bin_, &BinPage::bin_changed, this, &MainWindow::judge_again);
    connect(&judge_, &Judge::checked, this, [this](std::shared_ptr<const Judgement> judgement) {
        judgement_ = std::move(judgement);
        if (!document_.on_trial()) kept_ = judgement_;
        line_->say(qt(summary(judgement_->report, document_.converter)));
        strip_->set_judgement(judgement_);
        sheet_->show_seat(document_.converter, seat_, judgement_.get(), document_.on_trial() ? kept_.get() : nullptr);
        statusBar()->clearMessage();
        if (rank_due_) {
            rank_due_ = false;
            rank_again();
        }
    });
    connect(&judge_, &Judge::ranked, this, [this](std::shared_ptr<const Ranking> ranking) {
        if (ranking->seat == seat_) sheet_->show_ranking(std::move(ranking));
    });
    connect(&judge_, &Judge::progressed, this, [this](double share) { sheet_->show_progress(std::min(share, 0.99)); });
    connect(&judge_, &Judge::failed, this, [this](const QString& text) {
        line_->say(text);
        judgement_.reset();
        strip_->set_judgement(nullptr);
        sheet_->show_seat(document_.converter, seat_, nullptr, nullptr);
        sheet_->show_progress(1);
        sheet_->withhold("not judged");
        statusBar()->clearMessage();
    });
    connect(&judge_, &Judge::rank_failed, this, [this](const QString& text) {
        complain(text);
        sheet_->show_progress(1);
        sheet_->withhold("not judged");
    });

    open_bin(start);
    QString path = QString::fromStdString(start.converter_path);
    if (settings_) {
        const QSettings state;
        restoreGeometry(state.value("window/geometry").toByteArray());
        sheet_->arrange(state.value("window/sheet").toByteArray());
        if (path.isEmpty()) path = state.value("window/file").toString();
        if (const auto seat = find_seat(state.value("window/seat", "output_capacitor").toString().toStdString())) seat_ = *seat;
    }
    document_ = new_document(new_converter_text(*find_topology("sepic"), {"New converter", {10, 15}, {12, 12}, {0.1, 1}, 100e3}));
    if (!path.isEmpty() && QFileInfo::exists(path)) open(path);
    else {
        document_.saved = document_.text;
        show_document();
        judge_again();
    }
}

MainWindow::~MainWindow() { judge_.cancel(); }

void MainWindow::open_bin(const WindowStart& start) {
    try {
        if (start.demo) {
            store_ = std::make_unique<Store>(":memory:");
            store_->apply(demo_edit(*store_));
            bin_name_ = "The demo's bin: kept in memory, changes are not saved.";
        } else {
            const std::string path = start.bin_path.empty() ? default_bin_path() : start.bin_path;
            store_ = std::make_unique<Store>(path);
            if (store_->parts().empty()) store_->apply(starter_edit(*store_));
            bin_name_ = "Bin: " + QString::fromStdString(path);
        }
    } catch (const std::exception& error) {
        store_ = std::make_unique<Store>(":memory:");
        bin_name_ = "A bin in memory, changes are not saved: " + trouble_text(error);
    }
    bin_->open(store_.get(), bin_name_);
}

void MainWindow::make_menus() {
    const auto add = [this](QMenu* menu, const QString& name, const QString& text, const QKeySequence& keys, auto action) {
        auto* made = menu->addAction(text);
        made->setObjectName(name);
        made->setShortcut(keys);
        connect(made, &QAction::triggered, this, action);
        return made;
    };
    auto* file = menuBar()->addMenu("&File");
    add(file, "action_new", "&New…", QKeySequence::New, [this] { new_converter(); });
    add(file, "action_open", "&Open…", QKeySequence::Open, [this] {
        if (!may_leave()) return;
        if (const auto path = ask_.open_file(this)) open(*path);
    });
    add(file, "action_save", "&Save", QKeySequence::Save, [this] { save(); });
    add(file, "action_save_as", "Save &as…", QKeySequence::SaveAs, [this] { save_as(); });
    file->addSeparator();
    add(file, "action_quit", "&Quit", QKeySequence::Quit, [this] { close(); });
    auto* edit = menuBar()->addMenu("&Edit");
    add(edit, "action_undo", "&Undo in the bin", QKeySequence::Undo, [this] { bin_->undo(); });
    add(edit, "action_redo", "&Redo in the bin", QKeySequence::Redo, [this] { bin_->redo(); });
    add(edit, "action_find", "&Find in the bin", QKeySequence::Find, [this] {
        pages_->setCurrentWidget(bin_);
        bin_->find_focus();
    });
    auto* help = menuBar()->addMenu("&Help");
    add(help, "action_help", "&Help and cautions", QKeySequence::HelpContents, [this] { show_help(); });
    add(help, "action_about", "&About", {}, [this] { show_about(); });
}

const Rulebook& MainWindow::book() const { return *find_rulebook("house"); }

Setup MainWindow::setup() const {
    return assemble(document_.converter, [this](const std::string& name) { return store_->engine_lot(name); });
}

void MainWindow::show_document() {
    setWindowTitle(qt(document_.name()) + "[*] – Binwright");
    setWindowModified(document_.unsaved());
    line_->show_document(document_);
    strip_->set_converter(document_.converter);
    if (!has_seat(*document_.converter.topology, seat_)) seat_ = Seat::output_capacitor;
    strip_->choose(seat_);
    sheet_->show_seat(document_.converter, seat_, judgement_.get(), nullptr);
}

void MainWindow::judge_again() {
    try {
        Setup now = setup();
        strip_->set_stale(true);
        rank_due_ = true;
        judge_.cancel_rank();
        sheet_->withhold("judging…");
        judge_.check(std::move(now), book());
        statusBar()->showMessage("judging…");
    } catch (const std::exception& error) {
        line_->say(trouble_text(error));
    }
}

void MainWindow::rank_again() {
    try {
        judge_.rank(setup(), seat_, store_->engine_lots(), book(), sheet_->prefer());
        sheet_->withhold("judging…");
        sheet_->show_progress(0);
    } catch (const std::exception& error) {
        complain(trouble_text(error));
    }
}

void MainWindow::change_value(const QString& key, const QString& value) {
    try {
        change(document_, key.toStdString(), value.toStdString());
        show_document();
        judge_again();
    } catch (const std::exception& error) {
        complain(trouble_text(error));
    }
}

void MainWindow::complain(const QString& text) { line_->complain(text); }

bool MainWindow::may_leave() {
    if (!document_.unsaved()) return true;
    switch (ask_.unsaved(this, qt(document_.name()))) {
        case Ask::Unsaved::save: return save();
        case Ask::Unsaved::discard: return true;
        case Ask::Unsaved::stay: return false;
    }
    return false;
}

void MainWindow::open(const QString& path) {
    try {
        document_ = open_document(path.toStdString());
        judgement_.reset();
        kept_.reset();
        show_document();
        judge_again();
    } catch (const std::exception& error) {
        QString text = trouble_text(error);
        if (const auto* input = dynamic_cast<const InputError*>(&error)) {
            QStringList all;
            for (const Fault& fault : input->faults) all << qt(to_string(fault));
            text = all.join('\n');
        }
        ask_.tell(this, "This file cannot be opened", text);
    }
}

bool MainWindow::save() {
    if (document_.path.empty()) return save_as();
    try {
        binwright::save(document_, document_.path);
        show_document();
        return true;
    } catch (const std::exception& error) {
        ask_.tell(this, "Not saved", trouble_text(error));
        return false;
    }
}

bool MainWindow::save_as() {
    const QString proposal = document_.path.empty() ? "converter.toml" : QString::fromStdString(document_.path);
    const auto path = ask_.save_file(this, proposal);
    if (!path) return false;
    try {
        binwright::save(document_, path->toStdString());
        show_document();
        return true;
    } catch (const std::exception& error) {
        ask_.tell(this, "Not saved", trouble_text(error));
        return false;
    }
}

void MainWindow::new_converter() {
    if (!may_leave()) return;
    QStringList kinds;
    for (const Topology& topology : topologies()) kinds << qt(topology.name);
    Form form("new_form", "New converter", [this](Form& f) {
        NewConverter answers;
        answers.title = f.value("title").isEmpty() ? "New converter" : f.string("title");
        answers.input_voltage = parse_range(f.string("input"), Unit::volt);
        answers.output_voltage = parse_range(f.string("output"), Unit::volt);
        answers.output_current = parse_range(f.string("current"), Unit::ampere);
        document_ = new_document(new_converter_text(*find_topology(f.string("topology")), answers));
        judgement_.reset();
        kept_.reset();
        show_document();
        judge_again();
    }, this);
    auto* kind = form.choice("topology", "Which converter?", kinds, "sepic");
    for (int k = 0; k < kind->count(); ++k) kind->setItemData(k, qt(topologies()[static_cast<std::size_t>(k)].meaning), Qt::ToolTipRole);
    form.text("input", "Input voltage?", "10.5 V .. 15 V", "lowest .. highest");
    form.check("input", [](const QString& text) { (void)parse_range(text.toStdString(), Unit::volt); });
    form.text("output", "Output voltage?", "12 V", "one value, or lowest .. highest");
    form.check("output", [](const QString& text) { (void)parse_range(text.toStdString(), Unit::volt); });
    form.text("current", "Output current?", "0.1 A .. 1 A", "lowest .. highest");
    form.check("current", [](const QString& text) { (void)parse_range(text.toStdString(), Unit::ampere); });
    form.text("title", "What is it for?");
    form.exec();
}

void MainWindow::show_help() {
    QString text =
        "Choose a seat in the circuit (click a tag, or arrow keys): its sheet shows what is used and what is left, and the bin's lots best first. "
        "Change a value in the first line by typing or with the wheel: everything is judged again at once, and the old value stands beside the new one "
        "until you keep or drop it. Enter on a lot tries it in the seat.\n\n"
        "A filled disc holds, an open ring is unproven (something must still be known), a barred ring is rejected.\n\nBefore power goes on:\n";
    for (const std::string& caution : cautions(document_.converter)) text += "• " + qt(caution) + "\n";
    ask_.tell(this, "Help and cautions", text);
}

void MainWindow::show_about() {
    ask_.tell(this, "About Binwright",
              "Binwright tells whether the power parts of a small DC-DC converter survive where they are put.\n\n"
              "Free software under the GNU General Public License, version 3 or later. There is no warranty: you decide, and you carry the risk. Local codes and "
              "licensed practice come before anything this program says.");
}

void MainWindow::closeEvent(QCloseEvent* event) {
    if (!may_leave()) {
        event->ignore();
        return;
    }
    if (settings_) {
        QSettings state;
        state.setValue("window/geometry", saveGeometry());
        state.setValue("window/sheet", sheet_->arrangement());
        state.setValue("window/file", QString::fromStdString(document_.path));
        state.setValue("window/seat", qt(to_string(seat_)));
    }
    judge_.cancel();
    event->accept();
}

void MainWindow::dragEnterEvent(QDragEnterEvent* event) {
    if (event->mimeData()->hasUrls() && event->mimeData()->urls().front().isLocalFile()) event->acceptProposedAction();
}

void MainWindow::dropEvent(QDropEvent* event) {
    if (may_leave()) open(event->mimeData()->urls().front().toLocalFile());
}

}  // namespace binwright
