// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/operating_line.hpp"

#include <QHBoxLayout>
#include <QVBoxLayout>
#include <QWheelEvent>
#include <cmath>

#include "app/window/ink.hpp"

namespace binwright {
namespace {

QString shown(double value, Unit unit) { return qt(format_quantity(value, unit, 5)); }

QString shown(const Range& range, Unit unit) {
    return range.single() ? shown(range.lowest, unit) : shown(range.lowest, unit) + " … " + shown(range.highest, unit);
}

}  // namespace

OperatingLine::OperatingLine(QWidget* parent) : QWidget(parent) {
    setObjectName("operating_line");
    auto* column = new QVBoxLayout(this);
    column->setContentsMargins(14, 10, 14, 4);
    sentence_ = new QLabel(this);
    sentence_->setObjectName("summary");
    sentence_->setAccessibleName("What holds and what does not");
    sentence_->setWordWrap(true);
    QFont large = sentence_->font();
    large.setPointSizeF(large.pointSizeF() * 1.35);
    sentence_->setFont(large);
    sentence_->setTextInteractionFlags(Qt::TextSelectableByMouse);
    column->addWidget(sentence_);
    auto* row = new QHBoxLayout;
    row->setSpacing(14);
    for (int k = 0; k < 5; ++k) {
        const OperatingInfo& about = kOperating[k];
        auto* cell = new QVBoxLayout;
        cell->setSpacing(1);
        auto* caption = new QLabel(qt(about.meaning), this);
        caption->setObjectName(qt(about.key) + "_caption");
        cell->addWidget(caption);
        auto* ends = new QHBoxLayout;
        ends->setSpacing(3);
        const auto field = [&](const QString& end) {
            auto* edit = new QLineEdit(this);
            edit->setObjectName(qt(about.key) + "_" + end);
            edit->setAccessibleName(end + " " + qt(about.meaning));
            edit->setMinimumWidth(edit->fontMetrics().horizontalAdvance("888.88 kHz"));
            write_on_paper(*edit);
            edit->installEventFilter(this);
            connect(edit, &QLineEdit::editingFinished, this, [this, k] { entered(k); });
            return edit;
        };
        fields_[static_cast<std::size_t>(k)].lowest = field("lowest");
        fields_[static_cast<std::size_t>(k)].highest = field("highest");
        ends->addWidget(fields_[static_cast<std::size_t>(k)].lowest);
        ends->addWidget(new QLabel("–", this));
        ends->addWidget(fields_[static_cast<std::size_t>(k)].highest);
        cell->addLayout(ends);
        auto* was = new QLabel(this);
        was->setObjectName(qt(about.key) + "_was");
        QFont small = was->font();
        small.setItalic(true);
        was->setFont(small);
        cell->addWidget(was);
        fields_[static_cast<std::size_t>(k)].was = was;
        row->addLayout(cell);
    }
    keep_ = new QPushButton("&Keep", this);
    keep_->setObjectName("keep");
    keep_->setToolTip("Keep the values on trial");
    drop_ = new QPushButton("&Drop", this);
    drop_->setObjectName("drop");
    drop_->setToolTip("Go back to the values before the trial");
    connect(keep_, &QPushButton::clicked, this, &OperatingLine::keep_wanted);
    connect(drop_, &QPushButton::clicked, this, &OperatingLine::drop_wanted);
    row->addWidget(keep_);
    row->addWidget(drop_);
    row->addStretch(1);
    column->addLayout(row);
    trouble_ = new QLabel(this);
    trouble_->setObjectName("operating_trouble");
    trouble_->setAccessibleName("What is wrong with a value");
    trouble_->setWordWrap(true);
    column->addWidget(trouble_);
    complain({});
}

void OperatingLine::say(const QString& sentence) { sentence_->setText(sentence); }

void OperatingLine::complain(const QString& text) {
    trouble_->setText(text);
    trouble_->setVisible(!text.isEmpty());
    QPalette colours = palette();
    colours.setColor(QPalette::WindowText, verdict_colour(Verdict::rejected, palette()));
    trouble_->setPalette(colours);
}

void OperatingLine::show_document(const Document& document) {
    for (std::size_t k = 0; k < 5; ++k) {
        const OperatingInfo& about = kOperating[k];
        const Range now = document.converter.operating.get(about.quantity), before = document.kept_converter.operating.get(about.quantity);
        shown_[k] = now;
        fields_[k].lowest->setText(shown(now.lowest, about.unit));
        fields_[k].highest->setText(shown(now.highest, about.unit));
        const bool other = now.lowest != before.lowest || now.highest != before.highest;
        fields_[k].was->setText(other ? "was " + shown(before, about.unit) : QString());
    }
    keep_->setVisible(document.on_trial());
    drop_->setVisible(document.on_trial());
    complain({});
}

void OperatingLine::entered(int which) {
    const auto k = static_cast<std::size_t>(which);
    const OperatingInfo& about = kOperating[which];
    const QString low = fields_[k].lowest->text(), high = fields_[k].highest->text();
    if (low == shown(shown_[k].lowest, about.unit) && high == shown(shown_[k].highest, about.unit)) return;
    try {
        Range range{parse_quantity(low.toStdString(), about.unit, true), parse_quantity(high.toStdString(), about.unit, true)};
        // An untouched end keeps its exact value; raising one end past the other takes it along.
        if (low == shown(shown_[k].lowest, about.unit)) range.lowest = shown_[k].lowest;
        if (high == shown(shown_[k].highest, about.unit)) range.highest = shown_[k].highest;
        if (shown_[k].single() && range.lowest > range.highest) range.highest = range.lowest;
        if (!(range.lowest <= range.highest)) {
            complain(QString("%1: the lowest, %2, is above the highest, %3").arg(qt(about.meaning), shown(range.lowest, about.unit), shown(range.highest, about.unit)));
            return;
        }
        const std::string value = range.single() ? format_exact(range.lowest, about.unit)
                                                 : format_exact(range.lowest, about.unit) + " .. " + format_exact(range.highest, about.unit);
        emit changed(qt(std::string("operating.") + std::string(about.key)), qt(value));
    } catch (const InputError& error) {
        complain(qt(about.meaning) + ": " + qt(error.faults.front().message));
    }
}

bool OperatingLine::eventFilter(QObject* watched, QEvent* event) {
    if (event->type() == QEvent::Wheel) {
        for (std::size_t k = 0; k < 5; ++k)
            for (QLineEdit* edit : {fields_[k].lowest, fields_[k].highest}) {
                if (edit != watched || !edit->hasFocus()) continue;
                const Unit unit = kOperating[k].unit;
                try {
                    double value = parse_quantity(edit->text().toStdString(), unit, true);
                    const int steps = static_cast<QWheelEvent*>(event)->angleDelta().y() > 0 ? 1 : -1;
                    // One step: a kelvin, or the nearest 1-2-5 value to two per cent.
                    double step = 1;
                    if (unit != Unit::celsius) {
                        const double rough = 0.02 * std::max(std::abs(value), 1e-12), decade = std::pow(10.0, std::floor(std::log10(rough)));
                        step = decade * (rough / decade >= 5 ? 5 : rough / decade >= 2 ? 2 : 1);
                        value = std::round(value / step) * step;
                    }
                    edit->setText(shown(value + steps * step, unit));
                    entered(static_cast<int>(k));
                } catch (const InputError&) {
                }
                return true;
            }
    }
    return QWidget::eventFilter(watched, event);
}

}  // namespace binwright
