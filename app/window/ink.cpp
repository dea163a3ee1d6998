// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/ink.hpp"

namespace binwright {
namespace {

QColor mixed(const QColor& a, const QColor& b, double share) {
    return QColor::fromRgbF(static_cast<float>(a.redF() + (b.redF() - a.redF()) * share), static_cast<float>(a.greenF() + (b.greenF() - a.greenF()) * share),
                            static_cast<float>(a.blueF() + (b.blueF() - a.blueF()) * share));
}

bool dark(const QPalette& palette) { return palette.color(QPalette::Base).lightnessF() < 0.5f; }

}  // namespace

Ink ink_of(const QPalette& palette) {
    const QColor paper = palette.color(QPalette::Base), text = palette.color(QPalette::Text);
    return {paper, mixed(paper, text, 0.8), mixed(paper, text, 0.28), text, mixed(paper, text, 0.62)};
}

QColor verdict_colour(Verdict verdict, const QPalette& palette) {
    const bool night = dark(palette);
    switch (verdict) {
        case Verdict::holds: return night ? QColor(0x3f, 0xc8, 0xa0) : QColor(0x00, 0x7a, 0x59);
        case Verdict::unproven: return night ? QColor(0xf0, 0xb8, 0x40) : QColor(0x9a, 0x66, 0x00);
        case Verdict::rejected: return night ? QColor(0xff, 0x8a, 0x4a) : QColor(0xb3, 0x45, 0x00);
        case Verdict::not_covered: return ink_of(palette).quiet;
    }
    return ink_of(palette).text;
}

void draw_verdict(QPainter& painter, const QRectF& box, Verdict verdict, const QPalette& palette) {
    painter.save();
    painter.setRenderHint(QPainter::Antialiasing);
    const QColor colour = verdict_colour(verdict, palette);
    const double width = box.width() / 6;
    const QRectF inner = box.adjusted(width, width, -width, -width);
    painter.setPen(QPen(colour, width));
    switch (verdict) {
        case Verdict::holds:
            painter.setBrush(colour);
            painter.drawEllipse(inner);
            break;
        case Verdict::unproven:
            painter.setBrush(Qt::NoBrush);
            painter.drawArc(inner, 60 * 16, 300 * 16);
            break;
        case Verdict::rejected:
            painter.setBrush(Qt::NoBrush);
            painter.drawEllipse(inner);
            painter.drawLine(QPointF(inner.left(), inner.center().y()), QPointF(inner.right(), inner.center().y()));
            break;
        case Verdict::not_covered:
            painter.setBrush(Qt::NoBrush);
            painter.drawRect(inner);
            break;
    }
    painter.restore();
}

void write_on_paper(QLineEdit& edit) {
    edit.setFrame(false);
    edit.setStyleSheet("QLineEdit { background: palette(base); border: 0; border-bottom: 1px solid palette(placeholder-text); padding: 2px 1px 1px 1px; }"
                       "QLineEdit:focus { border-bottom: 2px solid palette(highlight); padding-bottom: 0; }");
}

QString verdict_word(Verdict verdict) { return qt(to_string(verdict)); }

}  // namespace binwright
