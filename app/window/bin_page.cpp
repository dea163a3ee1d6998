// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/bin_page.hpp"

#include <QCompleter>
#include <QDate>
#include <QHBoxLayout>
#include <QHeaderView>
#include <QSplitter>
#include <QVBoxLayout>

#include "app/window/form.hpp"
#include "app/window/ink.hpp"

namespace binwright {
namespace {

int whole(const QString& text, int lowest) {
    bool good = false;
    const int value = text.toInt(&good);
    if (!good || value < lowest) throw InputError(Fault{{}, "", "\"" + text.toStdString() + "\" is no whole number from " + std::to_string(lowest) + " up", ""});
    return value;
}

QStringList origins() { return {"new", "surplus", "pulled"}; }

/// "V_RRM = 60 V; V_F = 0.62 V max @ 15 A, 25 °C": figures of a family, apart by semicolons.
std::vector<Figure> read_figures(const QString& text, Family family, Known known) {
    std::vector<Figure> figures;
    for (const QString& piece : text.split(';', Qt::SkipEmptyParts)) {
        const qsizetype equals = piece.indexOf('=');
        const std::string name = piece.left(equals).trimmed().toStdString();
        if (equals < 0) throw InputError(Fault{{}, "", "\"" + piece.trimmed().toStdString() + "\" has no =; write V_RRM = 60 V", ""});
        const auto symbol = find_symbol(name, family);
        if (!symbol) {
            std::vector<std::string> all;
            for (const SymbolInfo& row : symbols())
                if (find_symbol(row.name, family)) all.emplace_back(row.name);
            const std::string near = nearest_word(name, all);
            throw InputError(Fault{{}, "", "a " + std::string(to_string(family)) + " has no figure \"" + name + "\"" + (near.empty() ? "" : "; did you mean " + near + "?"), ""});
        }
        figures.push_back(parse_figure(*symbol, piece.mid(equals + 1).trimmed().toStdString(), known));
    }
    return figures;
}

}  // namespace

BinPage::BinPage(Ask& ask, QWidget* parent) : QWidget(parent), ask_(ask) {
    setObjectName("bin_page");
    auto* column = new QVBoxLayout(this);
    column->setContentsMargins(14, 10, 14, 8);
    auto* head = new QHBoxLayout;
    search_ = new QLineEdit(this);
    search_->setObjectName("bin_search");
    search_->setAccessibleName("Search the bin");
    search_->setPlaceholderText("search the bin: label, part, place, note, origin, a figure");
    search_->setClearButtonEnabled(true);
    write_on_paper(*search_);
    head->addWidget(search_, 1);
    const auto button = [&](const QString& name, const QString& text, void (BinPage::*action)()) {
        auto* made = new QPushButton(text, this);
        made->setObjectName(name);
        connect(made, &QPushButton::clicked, this, action);
        head->addWidget(made);
        return made;
    };
    button("bin_add", "&Add…", &BinPage::add);
    button("bin_edit", "&Edit…", &BinPage::edit);
    button("bin_measure", "&Measure…", &BinPage::measure);
    button("bin_take", "&Take…", &BinPage::take);
    button("bin_put", "&Put…", &BinPage::put);
    button("bin_remove", "Remo&ve", &BinPage::remove);
    undo_ = button("bin_undo", "&Undo", &BinPage::undo);
    redo_ = button("bin_redo", "&Redo", &BinPage::redo);
    column->addLayout(head);
    trouble_ = new QLabel(this);
    trouble_->setObjectName("bin_trouble");
    trouble_->setAccessibleName("What went wrong with the bin");
    trouble_->setWordWrap(true);
    trouble_->hide();
    column->addWidget(trouble_);

    auto* split = new QSplitter(Qt::Horizontal, this);
    table_ = new QTableView(split);
    table_->setObjectName("bin_lots");
    table_->setAccessibleName("Lots of the bin");
    model_ = new BinModel(this);
    table_->setModel(model_);
    table_->setSelectionBehavior(QAbstractItemView::SelectRows);
    table_->setSelectionMode(QAbstractItemView::SingleSelection);
    table_->verticalHeader()->hide();
    table_->verticalHeader()->setDefaultSectionSize(table_->fontMetrics().height() + 8);
    table_->setShowGrid(false);
    table_->setTabKeyNavigation(false);
    table_->horizontalHeader()->setStretchLastSection(true);
    table_->horizontalHeader()->setSectionsClickable(true);
    table_->horizontalHeader()->setSortIndicatorShown(true);
    table_->horizontalHeader()->setSortIndicator(BinModel::lot, Qt::AscendingOrder);
    const int unit = table_->fontMetrics().averageCharWidth();
    for (const auto& [section, width] : {std::pair<int, int>{BinModel::lot, 9}, {BinModel::pieces, 8}, {BinModel::part, 50}, {BinModel::place, 26}, {BinModel::origin, 24}})
        table_->setColumnWidth(section, unit * width);
    connect(table_->horizontalHeader(), &QHeaderView::sectionClicked, this, [this](int section) { model_->sort(section, table_->horizontalHeader()->sortIndicatorOrder()); });
    auto* side = new QSplitter(Qt::Vertical, split);
    sheet_ = new QTextBrowser(side);
    sheet_->setObjectName("lot_sheet");
    sheet_->setAccessibleName("The chosen lot");
    sheet_->setFrameShape(QFrame::NoFrame);
    history_ = new QListWidget(side);
    history_->setObjectName("bin_history");
    history_->setAccessibleName("History of the bin, newest first");
    side->addWidget(sheet_);
    side->addWidget(history_);
    side->setStretchFactor(0, 3);
    side->setStretchFactor(1, 2);
    split->addWidget(table_);
    split->addWidget(side);
    split->setStretchFactor(0, 5);
    split->setStretchFactor(1, 2);
    column->addWidget(split, 1);
    name_ = new QLabel(this);
    name_->setObjectName("bin_name");
    name_->setTextInteractionFlags(Qt::TextSelectableByMouse);
    column->addWidget(name_);

    connect(search_, &QLineEdit::textChanged, model_, &BinModel::search);
    connect(table_->selectionModel(), &QItemSelectionModel::currentChanged, this, [this] { show_chosen(); });
    connect(model_, &QAbstractItemModel::modelReset, this, [this] { show_chosen(); });
    connect(table_, &QTableView::activated, this, [this] { edit(); });
}

void BinPage::open(Store* store, const QString& name) {
    store_ = store;
    name_->setText(name);
    reload();
}

void BinPage::reload() {
    if (store_ == nullptr) return;
    const LotRecord* before = chosen();
    const std::int64_t id = before != nullptr ? before->id : 0;
    model_->load(*store_);
    for (int row = 0; row < model_->rowCount(); ++row)
        if (model_->record(model_->index(row, 0))->id == id) table_->selectRow(row);
    history_->clear();
    bool can_undo = false, can_redo = false;
    for (const HistoryEntry& entry : store_->history(60)) {
        history_->addItem(qt(entry.when.substr(0, 16) + "  " + entry.what) + (entry.undone ? "  (taken back)" : ""));
        if (!can_undo && entry.undone) can_redo = true;
        can_undo |= !entry.undone;
    }
    undo_->setEnabled(can_undo);
    redo_->setEnabled(can_redo);
    show_chosen();
}

const LotRecord* BinPage::chosen() const { return model_->record(table_->currentIndex()); }

void BinPage::say(const QString& trouble) {
    QPalette colours = palette();
    colours.setColor(QPalette::WindowText, verdict_colour(Verdict::rejected, palette()));
    trouble_->setPalette(colours);
    trouble_->setText(trouble);
    trouble_->setVisible(!trouble.isEmpty());
}

void BinPage::apply(const Edit& edit) {
    store_->apply(edit);
    say({});
    reload();
    emit bin_changed();
}

void BinPage::show_chosen() {
    const LotRecord* lot = chosen();
    if (lot == nullptr || store_ == nullptr) {
        sheet_->clear();
        return;
    }
    const PartRecord part = *store_->part(lot->part_id);
    const Lot judged = as_lot(part, *lot, store_->readings(lot->id));
    QString html = QString("<h3 style='margin:0'>%1</h3><p style='margin:0'>%2</p>").arg(qt(lot_label(lot->number)), qt(part.part.name).toHtmlEscaped());
    if (judged.suspect) html += QString("<p><b>suspect:</b> %1</p>").arg(qt(judged.suspect_why).toHtmlEscaped());
    html += "<table cellspacing='4'>";
    for (const Figure& figure : judged.part.figures) {
        const SymbolInfo& about = info(figure.symbol);
        html += QString("<tr><td>%1</td><td>%2</td><td><i>%3</i></td></tr>")
                    .arg(qt(about.name).toHtmlEscaped(), qt(format_figure(figure)).toHtmlEscaped(), qt(to_string(figure.known)) + (figure.date.empty() ? QString() : " " + qt(figure.date)));
    }
    sheet_->setHtml(html + "</table>");
}

void BinPage::undo() {
    try {
        if (!store_->undo()) say("There is nothing to take back.");
        else say({});
        reload();
        emit bin_changed();
    } catch (const std::exception& error) {
        say(trouble_text(error));
    }
}

void BinPage::redo() {
    try {
        if (!store_->redo()) say("There is nothing to do again.");
        else say({});
        reload();
        emit bin_changed();
    } catch (const std::exception& error) {
        say(trouble_text(error));
    }
}

void BinPage::add() {
    if (store_ == nullptr) return;
    QStringList names;
    for (const PartRecord& part : store_->parts()) names << qt(part.part.name);
    Form form("add_lot", "Add a lot", [this](Form& f) {
        Edit edit;
        LotRecord lot;
        const std::string name = f.string("part");
        if (name.empty()) {
            f.complain("part", "A lot is of some part: choose one, or write a new name.");
            return;
        }
        if (const auto known = store_->part_named(name)) {
            lot.part_id = known->id;
        } else {
            PartRecord type;
            type.part.family = find_family(f.string("family")).value_or(Family::capacitor);
            type.part.name = name;
            if (!f.value("technology").isEmpty()) type.part.attributes["technology"] = f.string("technology");
            type.part.figures = read_figures(f.value("figures"), type.part.family, find_known(f.string("known")).value_or(Known::told));
            if (type.part.figures.empty()) {
                f.complain("figures", "A new part needs at least one figure, such as its rating.");
                return;
            }
            for (const Figure& figure : type.part.figures)
                if (const std::string why = implausible(type.part, figure); !why.empty()) {
                    f.complain("figures", qt(why));
                    return;
                }
            edit.changes.emplace_back(Change<PartRecord>{std::nullopt, type});
            lot.part_id = -1;
        }
        lot.count = whole(f.value("count"), 0);
        lot.place = f.string("place");
        lot.origin = find_origin(f.string("origin")).value_or(Origin::pulled);
        lot.donor = f.string("donor");
        lot.date_code = f.string("date_code");
        lot.note = f.string("note");
        edit.changes.emplace_back(Change<LotRecord>{std::nullopt, lot});
        edit.what = "add " + std::to_string(lot.count) + " of " + name;
        apply(edit);
        last_place_ = f.value("place");
        last_origin_ = f.value("origin");
        last_donor_ = f.value("donor");
    }, this);
    auto* part = form.choice("part", "Part", names, {}, true);
    part->completer()->setFilterMode(Qt::MatchContains);
    part->completer()->setCompletionMode(QCompleter::PopupCompletion);
    form.text("count", "Pieces", "1");
    form.check("count", [](const QString& text) { (void)whole(text, 0); });
    form.text("place", "Place", last_place_, "Shed / grey cabinet / A3");
    form.choice("origin", "Origin", origins(), last_origin_.isEmpty() ? "pulled" : last_origin_);
    form.text("donor", "Pulled from", last_donor_);
    form.text("date_code", "Date code");
    form.text("note", "Note");
    form.note("For a part the bin does not know yet:");
    form.choice("family", "Family", {"capacitor", "rectifier", "switch"});
    form.text("technology", "Technology", {}, "aluminium, polymer, schottky, silicon …");
    form.text("figures", "Figures", {}, "U_R = 25 V; C = 470 µF; ESR = 38 mΩ max @ 100 kHz");
    form.check("figures", [&form](const QString& text) { (void)read_figures(text, find_family(form.string("family")).value_or(Family::capacitor), Known::told); });
    form.choice("known", "Known from", {"marked", "datasheet", "told"});
    form.exec();
}

void BinPage::edit() {
    const LotRecord* lot = chosen();
    if (lot == nullptr) return say("Choose a lot first.");
    const LotRecord before = *lot;
    Form form("edit_lot", "Edit " + qt(lot_label(before.number)), [this, before](Form& f) {
        LotRecord after = before;
        after.count = whole(f.value("count"), 0);
        after.place = f.string("place");
        after.origin = find_origin(f.string("origin")).value_or(before.origin);
        after.donor = f.string("donor");
        after.date_code = f.string("date_code");
        after.note = f.string("note");
        if (!(after == before)) apply({"edit " + lot_label(before.number), {Change<LotRecord>{before, after}}});
    }, this);
    form.text("count", "Pieces", QString::number(before.count));
    form.check("count", [](const QString& text) { (void)whole(text, 0); });
    form.text("place", "Place", qt(before.place));
    form.choice("origin", "Origin", origins(), qt(to_string(before.origin)));
    form.text("donor", "Pulled from", qt(before.donor));
    form.text("date_code", "Date code", qt(before.date_code));
    form.text("note", "Note", qt(before.note));
    form.exec();
}

void BinPage::measure() {
    const LotRecord* lot = chosen();
    if (lot == nullptr) return say("Choose a lot first.");
    const LotRecord of = *lot;
    const PartRecord part = *store_->part(of.part_id);
    QStringList names;
    for (const SymbolInfo& row : symbols())
        if (find_symbol(row.name, part.part.family) && !row.rating) names << qt(row.name);
    const auto read = [part](const QString& symbol, const QString& text) {
        return parse_figure(*find_symbol(symbol.toStdString(), part.part.family), text.toStdString(), Known::measured);
    };
    Form form("measure_lot", "Measure " + qt(lot_label(of.number)), [this, of, part, read](Form& f) {
        ReadingRecord reading;
        reading.lot_id = of.id;
        reading.figure = read(f.value("symbol"), f.value("reading"));
        reading.figure.date = f.string("date");
        reading.figure.method = f.string("method");
        if (const std::string why = implausible(part.part, reading.figure); !why.empty() && !ask_.sure(this, qt(why) + ".\nIs it so?")) {
            f.complain("reading", qt(why));
            return;
        }
        apply({"measure " + std::string(info(reading.figure.symbol).name) + " of " + lot_label(of.number), {Change<ReadingRecord>{std::nullopt, reading}}});
    }, this);
    form.choice("symbol", "Figure", names, names.contains("ESR") ? "ESR" : QString(names.value(0)));
    form.text("reading", "Reading", {}, "38 mΩ @ 100 kHz");
    form.check("reading", [&form, read](const QString& text) { (void)read(form.value("symbol"), text); });
    form.text("date", "Date", QDate::currentDate().toString(Qt::ISODate));
    form.check("date", [](const QString& text) {
        if (!QDate::fromString(text, Qt::ISODate).isValid()) throw InputError(Fault{{}, "", "a date is written 2026-11-30", ""});
    });
    form.text("method", "Method", {}, "LCR meter");
    form.exec();
}

void BinPage::take() {
    const LotRecord* lot = chosen();
    if (lot == nullptr) return say("Choose a lot first.");
    const LotRecord of = *lot;
    Form form("take_lot", "Take from " + qt(lot_label(of.number)), [this, of](Form& f) { apply(take_edit(*store_, of, whole(f.value("count"), 1))); }, this);
    form.text("count", "Pieces", "1");
    form.check("count", [](const QString& text) { (void)whole(text, 1); });
    form.exec();
}

void BinPage::put() {
    const LotRecord* lot = chosen();
    if (lot == nullptr) return say("Choose a lot first.");
    const LotRecord of = *lot;
    Form form("put_lot", "Put to " + qt(lot_label(of.number)), [this, of](Form& f) { apply(put_edit(*store_, of, whole(f.value("count"), 1), f.string("place"))); }, this);
    form.text("count", "Pieces", "1");
    form.check("count", [](const QString& text) { (void)whole(text, 1); });
    form.text("place", "Place", qt(of.place));
    form.exec();
}

void BinPage::remove() {
    const LotRecord* lot = chosen();
    if (lot == nullptr) return say("Choose a lot first.");
    const LotRecord gone = *lot;
    if (!ask_.sure(this, "Remove " + qt(lot_label(gone.number)) + " and its readings from the bin? It can be taken back.")) return;
    Edit edit{"remove " + lot_label(gone.number), {}};
    for (const ReadingRecord& reading : store_->readings(gone.id)) edit.changes.emplace_back(Change<ReadingRecord>{reading, std::nullopt});
    edit.changes.emplace_back(Change<LotRecord>{gone, std::nullopt});
    try {
        apply(edit);
    } catch (const std::exception& error) {
        say(trouble_text(error));
    }
}

}  // namespace binwright
