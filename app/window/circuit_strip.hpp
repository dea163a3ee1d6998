// SPDX-License-Identifier: GPL-3.0-or-later
// The circuit drawn once across the full width, energy from left to right, a paper tag hanging from every seat; beneath
// it the intervals of the period, current in bold.
#pragma once
#include <QWidget>
#include <memory>

#include "app/window/judge.hpp"

namespace binwright {

class CircuitStrip : public QWidget {
    Q_OBJECT
  public:
    explicit CircuitStrip(QWidget* parent = nullptr);
    void set_converter(const Converter& converter);   ///< tags without verdicts until judged
    void set_judgement(std::shared_ptr<const Judgement> judgement);
    void set_stale(bool stale);                       ///< a newer judgement is on its way
    void choose(Seat seat);
    [[nodiscard]] Seat chosen() const { return chosen_; }
    [[nodiscard]] QString tag_text(Seat seat) const;  ///< as the tag says it, for readers and tests
    [[nodiscard]] QSize sizeHint() const override;
    [[nodiscard]] QSize minimumSizeHint() const override;

  signals:
    void seat_chosen(Seat seat);

  protected:
    void paintEvent(QPaintEvent*) override;
    void mousePressEvent(QMouseEvent* event) override;
    void keyPressEvent(QKeyEvent* event) override;

  private:
    const Topology* topology_ = nullptr;
    Converter converter_;
    std::shared_ptr<const Judgement> judgement_;
    bool stale_ = false;
    Seat chosen_ = Seat::switch_;

    struct Tag {
        Seat seat;
        QRectF box;
        QPointF anchor;
    };
    [[nodiscard]] std::vector<Tag> tags() const;
    [[nodiscard]] std::vector<Seat> seats_in_order() const;
    [[nodiscard]] QRectF circuit_area() const;
    void draw_tag(QPainter& painter, const Tag& tag) const;
    void draw_intervals(QPainter& painter) const;
};

}  // namespace binwright
