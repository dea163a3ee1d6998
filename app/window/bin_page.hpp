// SPDX-License-Identifier: GPL-3.0-or-later
// The bin: one search line, the lots, and what can be done with them. Every change goes through the store, so that it can be
// taken back.
#pragma once
#include <QLabel>
#include <QLineEdit>
#include <QListWidget>
#include <QPushButton>
#include <QTableView>
#include <QTextBrowser>
#include <QWidget>

#include "app/window/ask.hpp"
#include "app/window/lots_model.hpp"

namespace binwright {

class BinPage : public QWidget {
    Q_OBJECT
  public:
    BinPage(Ask& ask, QWidget* parent = nullptr);
    void open(Store* store, const QString& name);  ///< not owned
    void reload();
    [[nodiscard]] BinModel* model() { return model_; }
    void undo();
    void redo();
    void add();
    void edit();
    void measure();
    void take();
    void put();
    void remove();
    void find_focus() { search_->setFocus(); }

  signals:
    void bin_changed();

  private:
    Ask& ask_;
    Store* store_ = nullptr;
    QLabel* name_;
    QLineEdit* search_;
    QTableView* table_;
    QTextBrowser* sheet_;
    QListWidget* history_;
    QLabel* trouble_;
    QPushButton* undo_;
    QPushButton* redo_;
    BinModel* model_;
    QString last_place_, last_origin_, last_donor_;  ///< stay for the next lot

    void apply(const Edit& edit);
    void show_chosen();
    void say(const QString& trouble);
    [[nodiscard]] const LotRecord* chosen() const;
};

}  // namespace binwright
