// SPDX-License-Identifier: GPL-3.0-or-later
// Rulers: for each finding a scale from zero to the rating, what the rule forbids hatched, the stress as a needle, the free
// distance dimensioned as on a mechanical drawing.
#pragma once
#include <QWidget>

#include "engine/answer/judge.hpp"

namespace binwright {

class Rulers : public QWidget {
    Q_OBJECT
  public:
    explicit Rulers(QWidget* parent = nullptr);
    void show_report(const SeatReport& report, const SeatReport* before);  ///< `before`: as kept, drawn as ghosts
    [[nodiscard]] QSize sizeHint() const override;
    [[nodiscard]] QSize minimumSizeHint() const override { return {280, sizeHint().height()}; }

  protected:
    void paintEvent(QPaintEvent*) override;

  private:
    std::vector<Finding> findings_;  ///< those with a stress and a limit
    std::vector<Finding> before_;
    [[nodiscard]] double row_height() const;
};

}  // namespace binwright
