// SPDX-License-Identifier: GPL-3.0-or-later
// Ink and paper: the few colours and marks that all drawings share. Colour never speaks alone: every verdict has a shape
// and a word.
#pragma once
#include <QColor>
#include <QPainter>
#include <QLineEdit>
#include <QPalette>

#include "engine/answer/judge.hpp"

namespace binwright {

struct Ink {
    QColor paper, line, faint, text, quiet;
};
[[nodiscard]] Ink ink_of(const QPalette& palette);

/// Colour-blind-safe (Okabe and Ito's set), darkened or lightened to be legible on the paper.
[[nodiscard]] QColor verdict_colour(Verdict verdict, const QPalette& palette);

/// Filled disc: holds; open ring with a gap: unproven; barred disc: rejected; small square: not covered.
void draw_verdict(QPainter& painter, const QRectF& box, Verdict verdict, const QPalette& palette);

/// A place to write on: a line under it instead of a box, heavier where the keyboard is. Legible on light and dark paper.
void write_on_paper(QLineEdit& edit);

[[nodiscard]] QString verdict_word(Verdict verdict);
[[nodiscard]] inline QString qt(std::string_view text) { return QString::fromUtf8(text.data(), static_cast<qsizetype>(text.size())); }

}  // namespace binwright
