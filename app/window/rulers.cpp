// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/rulers.hpp"

#include <QPainter>
#include <algorithm>
#include <cmath>

#include "app/window/ink.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

/// As people read it: temperatures from 0 °C.
double shown(double value, Unit unit) { return unit == Unit::celsius ? value - kCelsiusZero : value; }

}  // namespace

Rulers::Rulers(QWidget* parent) : QWidget(parent) {
    setObjectName("rulers");
    setAccessibleName("What is used and what is left, rule by rule");
    setSizePolicy(QSizePolicy::Expanding, QSizePolicy::Fixed);
}

double Rulers::row_height() const { return fontMetrics().height() * 3.9; }
QSize Rulers::sizeHint() const { return {420, static_cast<int>(std::max<std::size_t>(1, findings_.size()) * row_height() + fontMetrics().height() * 0.5)}; }

void Rulers::show_report(const SeatReport& report, const SeatReport* before) {
    const auto drawable = [](const std::vector<Finding>& all) {
        std::vector<Finding> some;
        for (const Finding& finding : all)
            if (finding.stress && finding.limit && std::isfinite(finding.stress->value) && std::isfinite(*finding.limit) && finding.ground == Ground::rule) some.push_back(finding);
        return some;
    };
    findings_ = drawable(report.findings);
    before_ = before != nullptr ? drawable(before->findings) : std::vector<Finding>();
    QString spoken;
    for (const Finding& finding : findings_) spoken += qt(words(finding).line) + ". ";
    setAccessibleDescription(spoken);
    updateGeometry();
    update();
}

void Rulers::paintEvent(QPaintEvent*) {
    QPainter painter(this);
    painter.setRenderHint(QPainter::Antialiasing);
    const Ink ink = ink_of(palette());
    painter.fillRect(rect(), ink.paper);
    const double line = fontMetrics().height();
    for (std::size_t k = 0; k < findings_.size(); ++k) {
        const Finding& finding = findings_[k];
        const Unit unit = info(finding.rule.stress).unit;
        const double stress = shown(finding.stress->value, unit), limit = shown(*finding.limit, unit);
        const double rating = finding.rating ? shown(*finding.rating, unit) : limit;
        const bool at_least = finding.rule.bound == BoundKind::at_least;
        const double most = 1.06 * std::max({stress, limit, rating, 1e-300});
        const double top = static_cast<double>(k) * row_height() + line * 0.2;
        const double left_edge = line * 0.6, right_edge = width() - line * 0.8;
        const auto x = [&](double value) { return left_edge + std::clamp(value / most, 0.0, 1.0) * (right_edge - left_edge); };

        const double size = line * 0.75;
        draw_verdict(painter, QRectF(left_edge, top + line * 0.15, size, size), finding.verdict, palette());
        painter.setPen(ink.text);
        painter.drawText(QRectF(left_edge + size + line * 0.3, top, right_edge - left_edge - size, line * 1.1), Qt::AlignLeft | Qt::AlignVCenter,
                         fontMetrics().elidedText(qt(info(finding.rule.stress).meaning), Qt::ElideRight, static_cast<int>(right_edge - left_edge - size) / 2));
        painter.setPen(verdict_colour(finding.verdict, palette()));
        painter.drawText(QRectF(left_edge, top, right_edge - left_edge, line * 1.1), Qt::AlignRight | Qt::AlignVCenter, qt(left(finding)));

        // The scale, and what the rule forbids of it.
        const double bar_top = top + line * 1.45, bar = line * 0.75;
        const QRectF scale(x(0), bar_top, x(std::max(rating, limit)) - x(0), bar);
        painter.setPen(QPen(ink.line, 1.2));
        painter.setBrush(Qt::NoBrush);
        painter.drawRect(scale);
        const QRectF forbidden = at_least ? QRectF(QPointF(x(0), bar_top), QPointF(x(limit), bar_top + bar)) : QRectF(QPointF(x(limit), bar_top), QPointF(x(most), bar_top + bar));
        painter.fillRect(forbidden, QBrush(ink.faint, Qt::BDiagPattern));
        painter.drawLine(QPointF(x(limit), bar_top - line * 0.12), QPointF(x(limit), bar_top + bar + line * 0.12));
        // The needle, and the ghost of where it stood before the trial.
        const auto needle = [&](double value, const QColor& colour, double width) {
            painter.setPen(QPen(colour, width));
            painter.setBrush(colour);
            painter.drawLine(QPointF(x(value), bar_top - line * 0.22), QPointF(x(value), bar_top + bar));
            painter.drawPolygon(QPolygonF({QPointF(x(value), bar_top), QPointF(x(value) - line * 0.2, bar_top - line * 0.32), QPointF(x(value) + line * 0.2, bar_top - line * 0.32)}));
        };
        for (const Finding& old : before_)
            if (old.rule.id == finding.rule.id && std::abs(old.stress->value - finding.stress->value) > 1e-9 * std::abs(old.stress->value)) needle(shown(old.stress->value, unit), ink.faint, 1);
        needle(stress, ink.text, 2);
        // The free distance, dimensioned.
        const double dimension = bar_top + bar + line * 0.42;
        painter.setPen(QPen(ink.quiet, 1));
        painter.setBrush(ink.quiet);
        const double a = x(std::min(stress, limit)), b = x(std::max(stress, limit));
        painter.drawLine(QPointF(a, dimension), QPointF(b, dimension));
        if (b - a > line * 0.8)
            for (const auto& [at, way] : {std::pair(a, 1.0), std::pair(b, -1.0)})
                painter.drawPolygon(QPolygonF({QPointF(at, dimension), QPointF(at + way * line * 0.3, dimension - line * 0.1), QPointF(at + way * line * 0.3, dimension + line * 0.1)}));
        QFont small = font();
        small.setPointSizeF(small.pointSizeF() * 0.88);
        painter.setFont(small);
        painter.setPen(ink.quiet);
        const QRectF below(left_edge, dimension + line * 0.1, right_edge - left_edge, line);
        painter.drawText(below, Qt::AlignLeft | Qt::AlignVCenter, qt("stress " + format_quantity(finding.stress->value, unit, 3)));
        painter.drawText(below, Qt::AlignRight | Qt::AlignVCenter,
                         qt((at_least ? "at least " : "limit ") + format_quantity(*finding.limit, unit, 3) + (finding.rating ? "  of " + format_quantity(*finding.rating, unit, 3) : "")));
        painter.setFont(font());
    }
    if (findings_.empty()) {
        painter.setPen(ink.quiet);
        painter.drawText(rect().adjusted(8, 4, -8, -4), Qt::AlignLeft | Qt::AlignTop, "No rule could be measured here yet.");
    }
}

}  // namespace binwright
