// SPDX-License-Identifier: GPL-3.0-or-later
// The first line: one sentence over everything, and under it the operating values, edited where they stand.
#pragma once
#include <QLabel>
#include <QLineEdit>
#include <QPushButton>
#include <QWidget>
#include <array>

#include "app/window/document.hpp"

namespace binwright {

class OperatingLine : public QWidget {
    Q_OBJECT
  public:
    explicit OperatingLine(QWidget* parent = nullptr);
    void show_document(const Document& document);
    void say(const QString& sentence);
    void complain(const QString& text);  ///< beneath the values; empty: nothing is wrong
    [[nodiscard]] QString sentence() const { return sentence_->text(); }

  signals:
    void changed(const QString& key, const QString& value);  ///< as a converter file says it
    void keep_wanted();
    void drop_wanted();

  protected:
    bool eventFilter(QObject* watched, QEvent* event) override;

  private:
    struct Field {
        QLineEdit* lowest;
        QLineEdit* highest;
        QLabel* was;
    };
    QLabel* sentence_;
    QLabel* trouble_;
    QPushButton* keep_;
    QPushButton* drop_;
    std::array<Field, 5> fields_{};
    std::array<Range, 5> shown_{};
    void entered(int which);
};

}  // namespace binwright
