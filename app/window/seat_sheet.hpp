// SPDX-License-Identifier: GPL-3.0-or-later
// The chosen seat as one sheet: rulers of what is fitted, the bin's lots best first, and the findings of the chosen lot.
#pragma once
#include <QComboBox>
#include <QLabel>
#include <QLineEdit>
#include <QProgressBar>
#include <QPushButton>
#include <QSplitter>
#include <QTableView>
#include <QTextBrowser>
#include <QWidget>

#include "app/window/lots_model.hpp"
#include "app/window/rulers.hpp"

namespace binwright {

class SeatSheet : public QWidget {
    Q_OBJECT
  public:
    explicit SeatSheet(QWidget* parent = nullptr);
    void show_seat(const Converter& converter, Seat seat, const Judgement* judgement, const Judgement* kept);
    void show_ranking(std::shared_ptr<const Ranking> ranking);
    void show_progress(double share);  ///< of the ranking; ≥ 1: done
    void withhold(const QString& instead);  ///< the verdicts on show no longer stand; `instead` takes their place
    [[nodiscard]] CandidateModel* model() { return model_; }
    [[nodiscard]] Prefer prefer() const;

  signals:
    void cancel_wanted();
    void rank_wanted();
    void fit_wanted(const QString& label);  ///< try this lot in the seat

  public:
    [[nodiscard]] QByteArray arrangement() const;  ///< of the splitters, for the next start
    void arrange(const QByteArray& saved);

  private:
    QLabel* title_;
    QTextBrowser* fitted_;
    Rulers* rulers_;
    QLineEdit* search_;
    QTableView* table_;
    QTextBrowser* findings_;
    QProgressBar* progress_;
    QPushButton* cancel_;
    QPushButton* fit_;
    QComboBox* prefer_;
    QList<QSplitter*> splitters_;
    CandidateModel* model_;
    void chosen();
};

/// Findings as text for a person: line, because, rule, mend, settle, assumptions.
[[nodiscard]] QString findings_html(const std::vector<Finding>& findings, const QPalette& palette);

}  // namespace binwright
