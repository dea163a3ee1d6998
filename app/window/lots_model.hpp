// SPDX-License-Identifier: GPL-3.0-or-later
// Tables straight over the program's own results: ranked candidates, and the lots of the bin. Sorting and searching work on an
// index of their own.
#pragma once
#include <QAbstractTableModel>

#include "app/window/judge.hpp"
#include "catalog/store.hpp"

namespace binwright {

/// A table of rows that can be searched and sorted; rows are numbered by where they stand in the source.
class IndexedModel : public QAbstractTableModel {
    Q_OBJECT
  public:
    using QAbstractTableModel::QAbstractTableModel;
    [[nodiscard]] int rowCount(const QModelIndex& parent = {}) const override;
    void sort(int column, Qt::SortOrder order) override;
    void search(const QString& words);
    [[nodiscard]] int source_row(const QModelIndex& index) const;  ///< −1 where there is none
    [[nodiscard]] QModelIndex index_of(int source_row) const;

  protected:
    [[nodiscard]] virtual int source_count() const = 0;
    [[nodiscard]] virtual QString text_of(int source_row) const = 0;             ///< searched
    [[nodiscard]] virtual QVariant key_of(int source_row, int column) const = 0; ///< sorted by
    void rebuild();  ///< within begin/endResetModel

  private:
    std::vector<int> shown_;
    QString words_;
    int column_ = -1;
    Qt::SortOrder order_ = Qt::AscendingOrder;
    void arrange();
};

class CandidateModel : public IndexedModel {
    Q_OBJECT
  public:
    using IndexedModel::IndexedModel;
    enum Column { lot, verdict, part, reason, headroom, count };
    void show(std::shared_ptr<const Ranking> ranking);
    /// What is shown was judged for other values, or is being judged: no verdict stands. An empty text: they stand.
    void withhold(const QString& instead);
    [[nodiscard]] bool withheld() const { return !instead_.isEmpty(); }
    [[nodiscard]] Seat seat() const { return ranking_ ? ranking_->seat : Seat::switch_; }
    [[nodiscard]] const Candidate* candidate(const QModelIndex& index) const;
    [[nodiscard]] int columnCount(const QModelIndex& = {}) const override { return count; }
    [[nodiscard]] QVariant data(const QModelIndex& index, int role) const override;
    [[nodiscard]] QVariant headerData(int section, Qt::Orientation orientation, int role) const override;

  protected:
    [[nodiscard]] int source_count() const override;
    [[nodiscard]] QString text_of(int row) const override;
    [[nodiscard]] QVariant key_of(int row, int column) const override;

  private:
    std::shared_ptr<const Ranking> ranking_;
    QString instead_;
};

class BinModel : public IndexedModel {
    Q_OBJECT
  public:
    using IndexedModel::IndexedModel;
    enum Column { lot, pieces, part, place, origin, note, count };
    void load(const Store& store);
    [[nodiscard]] const LotRecord* record(const QModelIndex& index) const;
    [[nodiscard]] int columnCount(const QModelIndex& = {}) const override { return count; }
    [[nodiscard]] QVariant data(const QModelIndex& index, int role) const override;
    [[nodiscard]] QVariant headerData(int section, Qt::Orientation orientation, int role) const override;

  protected:
    [[nodiscard]] int source_count() const override { return static_cast<int>(lots_.size()); }
    [[nodiscard]] QString text_of(int row) const override;
    [[nodiscard]] QVariant key_of(int row, int column) const override;

  private:
    std::vector<LotRecord> lots_;
    std::vector<Part> parts_;
    std::vector<QString> suspect_;
};

}  // namespace binwright
