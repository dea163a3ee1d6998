// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/seat_sheet.hpp"

#include <QHeaderView>
#include <QDataStream>
#include <QHBoxLayout>
#include <QScrollArea>
#include <QSplitter>
#include <QVBoxLayout>

#include "app/window/ink.hpp"
#include "engine/words/words.hpp"

namespace binwright {

namespace {

constexpr Prefer kPreferences[] = {Prefer::headroom, Prefer::cool, Prefer::life, Prefer::thrift};

}  // namespace

QString findings_html(const std::vector<Finding>& findings, const QPalette& palette) {
    QString html;
    for (const Finding& finding : findings) {
        const Wording text = words(finding);
        const QString colour = verdict_colour(finding.verdict, palette).name();
        html += QString("<p style='margin:6px 0 0 0'><b style='color:%1'>%2</b>&nbsp; %3</p>").arg(colour, verdict_word(finding.verdict), qt(text.line).toHtmlEscaped());
        const auto row = [&](const char* what, const std::string& say) {
            if (!say.empty()) html += QString("<div style='margin-left:18px'><i>%1</i>&nbsp; %2</div>").arg(QString(what), qt(say).toHtmlEscaped());
        };
        row("because", text.because);
        row("rule", text.rule);
        row("to mend", text.mend);
        row("to settle", text.settle);
        row("rests on", text.rests_on);
    }
    return html;
}

SeatSheet::SeatSheet(QWidget* parent) : QWidget(parent) {
    setObjectName("seat_sheet");
    auto* column = new QVBoxLayout(this);
    column->setContentsMargins(14, 4, 14, 8);
    title_ = new QLabel(this);
    title_->setObjectName("seat_title");
    QFont bold = title_->font();
    bold.setBold(true);
    bold.setPointSizeF(bold.pointSizeF() * 1.15);
    title_->setFont(bold);
    column->addWidget(title_);

    auto* split = new QSplitter(Qt::Horizontal, this);
    split->setObjectName("seat_split");
    auto* left_side = new QSplitter(Qt::Vertical, split);
    auto* scroll = new QScrollArea(left_side);
    scroll->setObjectName("rulers_scroll");
    scroll->setAccessibleName("Rulers");
    scroll->setWidgetResizable(true);
    scroll->setFrameShape(QFrame::NoFrame);
    rulers_ = new Rulers(scroll);
    scroll->setWidget(rulers_);
    fitted_ = new QTextBrowser(left_side);
    fitted_->setObjectName("fitted_findings");
    fitted_->setAccessibleName("Findings on what is fitted");
    fitted_->setFrameShape(QFrame::NoFrame);
    left_side->addWidget(scroll);
    left_side->addWidget(fitted_);
    left_side->setStretchFactor(0, 3);
    left_side->setStretchFactor(1, 2);

    auto* right_side = new QWidget(split);
    auto* right = new QVBoxLayout(right_side);
    right->setContentsMargins(6, 0, 0, 0);
    auto* head = new QHBoxLayout;
    search_ = new QLineEdit(right_side);
    search_->setObjectName("lots_search");
    search_->setAccessibleName("Search the ranked lots");
    search_->setPlaceholderText("search the lots: label, part, verdict, origin");
    search_->setClearButtonEnabled(true);
    write_on_paper(*search_);
    head->addWidget(search_, 1);
    head->addWidget(new QLabel("prefer", right_side));
    prefer_ = new QComboBox(right_side);
    prefer_->setObjectName("prefer");
    prefer_->setAccessibleName("What to prefer among lots that hold");
    for (const Prefer one : kPreferences) prefer_->addItem(qt(to_string(one)));
    connect(prefer_, &QComboBox::currentIndexChanged, this, [this] { emit rank_wanted(); });
    head->addWidget(prefer_);
    progress_ = new QProgressBar(right_side);
    progress_->setObjectName("rank_progress");
    progress_->setAccessibleName("How much of the bin has been judged");
    progress_->setMaximumWidth(140);
    progress_->setRange(0, 100);
    head->addWidget(progress_);
    cancel_ = new QPushButton("&Cancel", right_side);
    cancel_->setObjectName("rank_cancel");
    head->addWidget(cancel_);
    fit_ = new QPushButton("&Try in the seat", right_side);
    fit_->setObjectName("fit");
    fit_->setEnabled(false);
    head->addWidget(fit_);
    right->addLayout(head);
    auto* stack = new QSplitter(Qt::Vertical, right_side);
    table_ = new QTableView(stack);
    table_->setObjectName("ranked_lots");
    table_->setAccessibleName("Lots of the bin for this seat, best first");
    model_ = new CandidateModel(this);
    table_->setModel(model_);
    table_->setSelectionBehavior(QAbstractItemView::SelectRows);
    table_->setSelectionMode(QAbstractItemView::SingleSelection);
    table_->setSortingEnabled(false);
    table_->verticalHeader()->hide();
    table_->verticalHeader()->setDefaultSectionSize(table_->fontMetrics().height() + 8);
    table_->setShowGrid(false);
    table_->setWordWrap(false);
    table_->setTabKeyNavigation(false);
    table_->horizontalHeader()->setSectionsClickable(true);
    table_->horizontalHeader()->setSortIndicatorShown(true);
    table_->horizontalHeader()->setSortIndicator(-1, Qt::AscendingOrder);  // as ranked, until a column is chosen
    const int unit = table_->fontMetrics().averageCharWidth();
    for (const auto& [section, width] : {std::pair<int, int>{CandidateModel::lot, 9}, {CandidateModel::verdict, 15}, {CandidateModel::part, 36}, {CandidateModel::headroom, 19}})
        table_->setColumnWidth(section, unit * width);
    table_->horizontalHeader()->setSectionResizeMode(CandidateModel::reason, QHeaderView::Stretch);
    connect(table_->horizontalHeader(), &QHeaderView::sectionClicked, this, [this](int section) {
        auto* header = table_->horizontalHeader();
        model_->sort(section, header->sortIndicatorOrder());
    });
    findings_ = new QTextBrowser(stack);
    findings_->setObjectName("lot_findings");
    findings_->setAccessibleName("Findings on the chosen lot");
    findings_->setFrameShape(QFrame::NoFrame);
    stack->addWidget(table_);
    stack->addWidget(findings_);
    stack->setStretchFactor(0, 3);
    stack->setStretchFactor(1, 2);
    right->addWidget(stack, 1);
    split->addWidget(left_side);
    split->addWidget(right_side);
    split->setStretchFactor(0, 2);
    split->setStretchFactor(1, 5);
    column->addWidget(split, 1);
    splitters_ = {split, left_side, stack};

    connect(search_, &QLineEdit::textChanged, model_, &CandidateModel::search);
    connect(cancel_, &QPushButton::clicked, this, [this] {
        if (cancel_->text().startsWith("&Cancel")) emit cancel_wanted();
        else emit rank_wanted();
    });
    connect(table_->selectionModel(), &QItemSelectionModel::currentChanged, this, [this] { chosen(); });
    connect(model_, &QAbstractItemModel::modelReset, this, [this] { chosen(); });
    const auto fit = [this] {
        if (const Candidate* one = model_->candidate(table_->currentIndex())) emit fit_wanted(qt(one->lot.label));
    };
    connect(fit_, &QPushButton::clicked, this, fit);
    connect(table_, &QTableView::activated, this, fit);
    show_progress(1);
}

void SeatSheet::show_seat(const Converter& converter, Seat seat, const Judgement* judgement, const Judgement* kept) {
    const auto report_in = [seat](const Judgement* from) -> const SeatReport* {
        if (from == nullptr) return nullptr;
        const SeatReport* worst = nullptr;
        for (const SeatReport& report : from->report.seats)
            if (report.seat == seat && (worst == nullptr || graver(report.verdict, worst->verdict) != worst->verdict)) worst = &report;
        return worst;
    };
    QString name = qt(to_string(seat));
    name.replace('_', ' ');
    const SeatReport* now = report_in(judgement);
    QString title = qt(converter.reference(seat)) + ": " + name;
    if (now != nullptr && !now->part.empty()) title += ", " + (now->lot.empty() ? QString() : qt(now->lot) + "  ") + qt(now->part);
    title_->setText(title);
    rulers_->show_report(now != nullptr ? *now : SeatReport{}, report_in(kept));
    // A mixed bank is several lots in one seat: the gravest on the rulers, every one in words.
    QString html;
    int lots = 0;
    if (judgement != nullptr)
        for (const SeatReport& report : judgement->report.seats) lots += report.seat == seat;
    if (judgement != nullptr)
        for (const SeatReport& report : judgement->report.seats) {
            if (report.seat != seat) continue;
            if (lots > 1) html += QString("<p style='margin:8px 0 0 0'><b>%1</b>&nbsp; %2</p>").arg(qt(report.lot), qt(report.part).toHtmlEscaped());
            html += findings_html(report.findings, palette());
        }
    fitted_->setHtml(html.isEmpty() ? QString("<p>not judged yet</p>") : html);
    if (model_->rowCount() > 0 && model_->seat() != seat) model_->show(nullptr);
}

void SeatSheet::show_ranking(std::shared_ptr<const Ranking> ranking) {
    model_->show(std::move(ranking));
    if (model_->rowCount() > 0) table_->selectRow(0);
    show_progress(1);
}

Prefer SeatSheet::prefer() const {
    return find_prefer(prefer_->currentText().toStdString()).value_or(Prefer::headroom);
}

QByteArray SeatSheet::arrangement() const {
    QByteArray all;
    QDataStream out(&all, QIODevice::WriteOnly);
    for (const QSplitter* splitter : splitters_) out << splitter->saveState();
    return all;
}

void SeatSheet::arrange(const QByteArray& saved) {
    QDataStream in(saved);
    for (QSplitter* splitter : splitters_) {
        QByteArray one;
        in >> one;
        if (!one.isEmpty()) splitter->restoreState(one);
    }
}

void SeatSheet::withhold(const QString& instead) {
    model_->withhold(instead);
    chosen();
}

void SeatSheet::show_progress(double share) {
    const bool running = share < 1;
    progress_->setVisible(running);
    progress_->setValue(static_cast<int>(100 * share));
    cancel_->setText(running ? "&Cancel" : "&Rank again");
}

void SeatSheet::chosen() {
    const Candidate* one = model_->candidate(table_->currentIndex());
    fit_->setEnabled(one != nullptr);
    if (one == nullptr || model_->withheld()) {
        findings_->clear();
        return;
    }
    QString html = QString("<p style='margin:0'><b>%1</b>&nbsp; %2</p>").arg(qt(one->lot.label), qt(one->lot.part.name).toHtmlEscaped());
    for (const std::string& other : one->knock_on) html += QString("<div>elsewhere: %1</div>").arg(qt(other).toHtmlEscaped());
    findings_->setHtml(html + findings_html(one->report.findings, palette()));
}

}  // namespace binwright
