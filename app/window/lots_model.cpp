// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/lots_model.hpp"

#include <QIcon>
#include <QApplication>
#include <QPainter>
#include <QPixmap>
#include <algorithm>
#include <cmath>
#include <numeric>

#include "app/window/ink.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

QIcon verdict_icon(Verdict verdict) {
    QPixmap picture(48, 48);
    picture.fill(Qt::transparent);
    QPainter painter(&picture);
    draw_verdict(painter, QRectF(4, 4, 40, 40), verdict, QApplication::palette());
    return QIcon(picture);
}

int weight(Verdict verdict) { return verdict == Verdict::holds ? 0 : verdict == Verdict::unproven ? 1 : verdict == Verdict::rejected ? 2 : 3; }

}  // namespace

int IndexedModel::rowCount(const QModelIndex& parent) const { return parent.isValid() ? 0 : static_cast<int>(shown_.size()); }

int IndexedModel::source_row(const QModelIndex& index) const {
    return index.isValid() && index.row() < static_cast<int>(shown_.size()) ? shown_[static_cast<std::size_t>(index.row())] : -1;
}

QModelIndex IndexedModel::index_of(int source_row) const {
    const auto found = std::find(shown_.begin(), shown_.end(), source_row);
    return found == shown_.end() ? QModelIndex() : index(static_cast<int>(found - shown_.begin()), 0);
}

void IndexedModel::arrange() {
    shown_.clear();
    const QStringList pieces = words_.split(' ', Qt::SkipEmptyParts);
    for (int row = 0; row < source_count(); ++row) {
        const QString text = pieces.isEmpty() ? QString() : text_of(row);
        if (std::all_of(pieces.begin(), pieces.end(), [&](const QString& piece) { return text.contains(piece, Qt::CaseInsensitive); })) shown_.push_back(row);
    }
    if (column_ < 0) return;
    std::stable_sort(shown_.begin(), shown_.end(), [this](int a, int b) {
        const QVariant x = key_of(a, column_), y = key_of(b, column_);
        const auto order = QVariant::compare(x, y);
        return order_ == Qt::AscendingOrder ? order == QPartialOrdering::Less : order == QPartialOrdering::Greater;
    });
}

void IndexedModel::rebuild() { arrange(); }

void IndexedModel::sort(int column, Qt::SortOrder order) {
    beginResetModel();
    column_ = column;
    order_ = order;
    arrange();
    endResetModel();
}

void IndexedModel::search(const QString& words) {
    beginResetModel();
    words_ = words;
    arrange();
    endResetModel();
}

// ---- candidates ------------------------------------------------------------------------------------------------------

void CandidateModel::show(std::shared_ptr<const Ranking> ranking) {
    beginResetModel();
    ranking_ = std::move(ranking);
    instead_.clear();
    rebuild();
    endResetModel();
}

void CandidateModel::withhold(const QString& instead) {
    instead_ = instead;
    if (rowCount() > 0) emit dataChanged(index(0, 0), index(rowCount() - 1, count - 1));
}

int CandidateModel::source_count() const { return ranking_ ? static_cast<int>(ranking_->candidates.size()) : 0; }

const Candidate* CandidateModel::candidate(const QModelIndex& index) const {
    const int row = source_row(index);
    return row < 0 ? nullptr : &ranking_->candidates[static_cast<std::size_t>(row)];
}

QString CandidateModel::text_of(int row) const {
    const Candidate& one = ranking_->candidates[static_cast<std::size_t>(row)];
    return qt(one.lot.label + " " + one.lot.part.name + " ") + verdict_word(one.report.verdict) + " " + qt(to_string(one.lot.origin));
}

QVariant CandidateModel::key_of(int row, int column) const {
    const Candidate& one = ranking_->candidates[static_cast<std::size_t>(row)];
    switch (column) {
        case lot: return static_cast<qlonglong>(std::atoll(one.lot.label.c_str()));
        case verdict: return weight(one.report.verdict) * 1000000 + row;  // best first within one verdict
        case part: return qt(one.lot.part.name);
        case headroom: return one.report.findings.empty() ? 0.0 : one.report.findings.front().headroom.value_or(-1e9);
        default: return row;
    }
}

QVariant CandidateModel::data(const QModelIndex& index, int role) const {
    const Candidate* one = candidate(index);
    if (one == nullptr) return {};
    if (withheld() && index.column() != lot && index.column() != part) {
        if (role == Qt::DisplayRole && index.column() == verdict) return instead_;
        return {};
    }
    const Finding* finding = one->report.findings.empty() ? nullptr : &one->report.findings.front();
    if (role == Qt::DecorationRole && index.column() == verdict) return verdict_icon(one->report.verdict);
    if (role == Qt::ForegroundRole && index.column() == verdict) return verdict_colour(one->report.verdict, QApplication::palette());
    if (role == Qt::ToolTipRole && finding != nullptr) return qt(words(*finding).line);
    if (role != Qt::DisplayRole) return {};
    switch (index.column()) {
        case lot: return qt(one->lot.label);
        case verdict: return verdict_word(one->report.verdict);
        case part: return QString("%1 ×%2, %3").arg(qt(one->lot.part.name)).arg(one->lot.count).arg(qt(to_string(one->lot.origin)));
        case reason: return finding == nullptr ? QString() : qt(words(*finding).line);
        case headroom: return finding != nullptr ? qt(left(*finding)) : QString();
        default: return {};
    }
}

QVariant CandidateModel::headerData(int section, Qt::Orientation orientation, int role) const {
    if (orientation != Qt::Horizontal || role != Qt::DisplayRole) return {};
    constexpr const char* names[] = {"Lot", "Verdict", "Part", "Why", "Room"};
    return QString(names[section]);
}

// ---- the bin ---------------------------------------------------------------------------------------------------------

void BinModel::load(const Store& store) {
    beginResetModel();
    lots_ = store.lots();
    parts_.clear();
    suspect_.clear();
    for (const LotRecord& one : lots_) {
        const PartRecord part = *store.part(one.part_id);
        suspect_.push_back(qt(as_lot(part, one, store.readings(one.id)).suspect_why));
        parts_.push_back(part.part);
    }
    rebuild();
    endResetModel();
}

const LotRecord* BinModel::record(const QModelIndex& index) const {
    const int row = source_row(index);
    return row < 0 ? nullptr : &lots_[static_cast<std::size_t>(row)];
}

QString BinModel::text_of(int row) const {
    const LotRecord& one = lots_[static_cast<std::size_t>(row)];
    const Part& part = parts_[static_cast<std::size_t>(row)];
    QString text = qt(lot_label(one.number) + " " + part.name + " " + one.place + " " + one.note + " " + one.donor + " " + one.date_code + " ") +
                   qt(to_string(one.origin)) + " " + qt(to_string(part.family));
    for (const Figure& figure : part.figures) text += " " + qt(info(figure.symbol).name) + " " + qt(format_quantity(figure.value.worst, info(figure.symbol).unit));
    return text;
}

QVariant BinModel::key_of(int row, int column) const {
    const LotRecord& one = lots_[static_cast<std::size_t>(row)];
    switch (column) {
        case lot: return static_cast<qlonglong>(one.number);
        case pieces: return one.count;
        case part: return qt(parts_[static_cast<std::size_t>(row)].name);
        case place: return qt(one.place);
        case origin: return qt(to_string(one.origin));
        default: return qt(one.note);
    }
}

QVariant BinModel::data(const QModelIndex& index, int role) const {
    const LotRecord* one = record(index);
    if (one == nullptr) return {};
    const auto row = static_cast<std::size_t>(source_row(index));
    if (role == Qt::TextAlignmentRole && index.column() == pieces) return static_cast<int>(Qt::AlignRight | Qt::AlignVCenter);
    if (role == Qt::ToolTipRole && !suspect_[row].isEmpty()) return "suspect: " + suspect_[row];
    if (role != Qt::DisplayRole) return {};
    switch (index.column()) {
        case lot: return qt(lot_label(one->number));
        case pieces: return one->count;
        case part: return qt(parts_[row].name);
        case place: return qt(one->place);
        case origin: return qt(to_string(one->origin)) + (one->donor.empty() ? QString() : ", " + qt(one->donor));
        case note: return suspect_[row].isEmpty() ? qt(one->note) : "suspect: " + suspect_[row];
        default: return {};
    }
}

QVariant BinModel::headerData(int section, Qt::Orientation orientation, int role) const {
    if (orientation != Qt::Horizontal || role != Qt::DisplayRole) return {};
    constexpr const char* names[] = {"Lot", "Pieces", "Part", "Place", "Origin", "Note"};
    return QString(names[section]);
}

}  // namespace binwright
