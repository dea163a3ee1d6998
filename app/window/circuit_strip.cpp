// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/circuit_strip.hpp"

#include <QKeyEvent>
#include <QMouseEvent>
#include <QPainter>
#include <algorithm>
#include <cmath>

#include "app/window/circuit_drawing.hpp"
#include "app/window/ink.hpp"
#include "engine/words/words.hpp"

namespace binwright {
namespace {

/// The reports of a seat (several where the bank is mixed), gravest first.
const SeatReport* report_of(const Judgement* judgement, Seat seat) {
    const SeatReport* worst = nullptr;
    if (judgement == nullptr) return nullptr;
    for (const SeatReport& report : judgement->report.seats)
        if (report.seat == seat && (worst == nullptr || graver(report.verdict, worst->verdict) != worst->verdict)) worst = &report;
    return worst;
}

QString temperature_of(const Judgement& judgement, Seat seat) {
    const auto found = judgement.report.exposure.seats.find(seat);
    if (found == judgement.report.exposure.seats.end()) return {};
    double hottest = -1;
    for (const PartExposure& part : found->second)
        for (const Stress stress : {Stress::junction_temperature, Stress::hot_spot_temperature})
            if (const StressValue* value = part.find(stress)) hottest = std::max(hottest, value->value);
    return hottest < 0 ? QString() : qt(format_quantity(hottest, Unit::celsius, 3));
}

}  // namespace

CircuitStrip::CircuitStrip(QWidget* parent) : QWidget(parent) {
    setObjectName("circuit_strip");
    setAccessibleName("Circuit with a tag at every seat");
    setFocusPolicy(Qt::StrongFocus);
    setSizePolicy(QSizePolicy::Expanding, QSizePolicy::Preferred);
}

QSize CircuitStrip::sizeHint() const { return {1000, fontMetrics().height() * 16}; }
QSize CircuitStrip::minimumSizeHint() const { return {640, fontMetrics().height() * 14}; }

void CircuitStrip::set_converter(const Converter& converter) {
    if (converter.topology != topology_) judgement_.reset();
    converter_ = converter;
    topology_ = converter.topology;
    if (topology_ != nullptr && !has_seat(*topology_, chosen_)) chosen_ = Seat::switch_;
    update();
}

void CircuitStrip::set_judgement(std::shared_ptr<const Judgement> judgement) {
    judgement_ = std::move(judgement);
    stale_ = false;
    QString spoken;
    for (const Seat seat : seats_in_order()) spoken += tag_text(seat) + ". ";
    setAccessibleDescription(spoken);
    update();
}

void CircuitStrip::set_stale(bool stale) {
    stale_ = stale;
    update();
}

void CircuitStrip::choose(Seat seat) {
    if (topology_ == nullptr || !has_seat(*topology_, seat)) return;
    const bool other = seat != chosen_;
    chosen_ = seat;
    update();
    if (other) emit seat_chosen(seat);
}

std::vector<Seat> CircuitStrip::seats_in_order() const {
    std::vector<std::pair<float, Seat>> order;
    if (topology_ != nullptr)
        for (const Branch& branch : topology_->branches)
            if (branch.seat) order.emplace_back(branch.x, *branch.seat);
    std::sort(order.begin(), order.end(), [](const auto& a, const auto& b) { return a.first < b.first; });
    std::vector<Seat> seats;
    for (const auto& [x, seat] : order) seats.push_back(seat);
    return seats;
}

/// The circuit and the tags under it; the still drawings of the intervals stand beside them, so that no leader line crosses one.
QRectF CircuitStrip::circuit_area() const {
    const double line = fontMetrics().height();
    return QRectF(rect()).adjusted(line * 2, line * 0.9, -line * 2 - width() * 0.24, -line * 8.2);
}

std::vector<CircuitStrip::Tag> CircuitStrip::tags() const {
    std::vector<Tag> all;
    if (topology_ == nullptr) return all;
    const double line = fontMetrics().height();
    const QRectF area = circuit_area();
    const std::vector<Seat> seats = seats_in_order();
    const double from = line * 0.5, room = (area.right() + line * 2 - from) / static_cast<double>(std::max<std::size_t>(1, seats.size()));
    for (std::size_t k = 0; k < seats.size(); ++k)
        for (const Branch& branch : topology_->branches) {
            if (branch.seat != seats[k]) continue;
            const QPointF anchor = place_of(*topology_, branch, area).middle();
            const double w = std::min(room - line * 0.6, line * 13.5);
            const double x = from + room * static_cast<double>(k) + (room - w) / 2;
            all.push_back({seats[k], QRectF(x, height() - line * 5.9, w, line * 5.4), anchor});
        }
    return all;
}

QString CircuitStrip::tag_text(Seat seat) const {
    const SeatReport* report = report_of(judgement_.get(), seat);
    QString text = qt(converter_.reference(seat));
    if (report == nullptr) return text + ", not judged yet";
    if (!report->lot.empty()) text += ", " + qt(report->lot);
    text += ", " + verdict_word(report->verdict);
    if (!report->findings.empty()) {
        const QString room = qt(left(report->findings.front()));
        if (!room.isEmpty()) text += ", " + room;
    }
    return text;
}

void CircuitStrip::draw_tag(QPainter& painter, const Tag& tag) const {
    const Ink ink = ink_of(palette());
    const double line = fontMetrics().height();
    const SeatReport* report = report_of(judgement_.get(), tag.seat);
    const bool chosen = tag.seat == chosen_;
    // A leader line from the part to its tag, a small ring where it takes hold.
    painter.setPen(QPen(ink.faint, 1));
    painter.setBrush(ink.paper);
    painter.drawLine(tag.anchor, QPointF(tag.box.center().x(), tag.box.top()));
    painter.drawEllipse(tag.anchor, 2.5, 2.5);
    QPolygonF outline({tag.box.topLeft() + QPointF(line * 0.5, 0), tag.box.topRight() - QPointF(line * 0.5, 0), tag.box.topRight() + QPointF(0, line * 0.5),
                       tag.box.bottomRight(), tag.box.bottomLeft(), tag.box.topLeft() + QPointF(0, line * 0.5)});
    painter.setPen(QPen(chosen ? ink.text : ink.faint, chosen ? 2.2 : 1.2));
    painter.drawPolygon(outline);
    painter.drawEllipse(QPointF(tag.box.center().x(), tag.box.top() + line * 0.35), line * 0.16, line * 0.16);

    const QRectF inner = tag.box.adjusted(line * 0.5, line * 0.6, -line * 0.4, -line * 0.25);
    const auto row = [&](int k) { return QRectF(inner.left(), inner.top() + k * line * 1.13, inner.width(), line * 1.13); };
    QFont bold = font();
    bold.setBold(true);
    painter.setFont(bold);
    painter.setPen(ink.text);
    QString head = qt(converter_.reference(tag.seat));
    if (report != nullptr && !report->lot.empty()) head += "  " + qt(report->lot);
    painter.drawText(row(0), Qt::AlignLeft | Qt::AlignVCenter, head);
    painter.setFont(font());
    if (report == nullptr) {
        painter.setPen(ink.quiet);
        painter.drawText(row(1), Qt::AlignLeft | Qt::AlignVCenter, "not judged yet");
        return;
    }
    painter.setOpacity(stale_ ? 0.45 : 1);
    const double size = line * 0.85;
    draw_verdict(painter, QRectF(inner.left(), row(1).center().y() - size / 2, size, size), report->verdict, palette());
    painter.setPen(verdict_colour(report->verdict, palette()));
    painter.setFont(bold);
    painter.drawText(row(1).adjusted(size + line * 0.35, 0, 0, 0), Qt::AlignLeft | Qt::AlignVCenter, verdict_word(report->verdict));
    painter.setFont(font());
    painter.setPen(ink.text);
    if (!report->findings.empty())
        painter.drawText(row(2), Qt::AlignLeft | Qt::AlignVCenter, fontMetrics().elidedText(qt(left(report->findings.front())), Qt::ElideRight, static_cast<int>(inner.width())));
    painter.setPen(ink.quiet);
    if (judgement_) painter.drawText(row(3), Qt::AlignLeft | Qt::AlignVCenter, temperature_of(*judgement_, tag.seat));
    painter.setOpacity(1);
}

void CircuitStrip::draw_intervals(QPainter& painter) const {
    if (!judgement_ || judgement_->intervals.empty()) return;
    const Ink ink = ink_of(palette());
    const double line = fontMetrics().height();
    const QRectF area = circuit_area();
    const QRectF column(area.right() + line * 2.5, line * 0.4, width() - area.right() - line * 3.2, height() - line * 0.9);
    const std::size_t shown = std::min<std::size_t>(3, judgement_->intervals.size());
    const double each = column.height() / static_cast<double>(shown);
    for (std::size_t k = 0; k < shown; ++k) {
        const IntervalView& view = judgement_->intervals[k];
        const QRectF box(column.left(), column.top() + each * static_cast<double>(k), column.width(), each);
        CircuitStyle style{ink.faint, ink.text, 0.9, {}};
        style.current = [&](const Branch& branch) {
            std::string name;
            switch (branch.kind) {
                case BranchKind::source: name = "source"; break;
                case BranchKind::primary: name = "primary"; break;
                case BranchKind::secondary: name = "secondary"; break;
                case BranchKind::switch_: name = "switch"; break;
                case BranchKind::rectifier: name = "rectifier"; break;
                case BranchKind::load: name = "load"; break;
                case BranchKind::capacitor: name = std::string(to_string(*branch.seat)); break;
            }
            const auto found = view.current.find(name);
            const double value = found == view.current.end() ? 0 : found->second;
            return branch.kind == BranchKind::source ? -value : value;  // its current leaves at the top
        };
        const double text = line * 1.15;
        draw_circuit(painter, *topology_, box.adjusted(line * 0.4, line * 0.7, -line * 0.4, -text - line * 0.35), style);
        painter.setPen(ink.quiet);
        const QString what = view.switch_on ? "switch on" : view.rectifier_on ? "rectifier conducts" : "both off";
        painter.drawText(QRectF(box.left(), box.bottom() - text, box.width(), text), Qt::AlignCenter,
                         QString("%1, %2 of the period").arg(what, qt(format_quantity(view.share, Unit::fraction, 3))));
    }
}

void CircuitStrip::paintEvent(QPaintEvent*) {
    QPainter painter(this);
    const Ink ink = ink_of(palette());
    painter.fillRect(rect(), ink.paper);
    if (topology_ == nullptr) return;
    painter.setRenderHint(QPainter::Antialiasing);
    draw_circuit(painter, *topology_, circuit_area(), {ink.line, ink.text, 1.5, {}});
    for (const Tag& tag : tags()) draw_tag(painter, tag);
    draw_intervals(painter);
    if (hasFocus()) {
        painter.setPen(QPen(ink.faint, 1, Qt::DotLine));
        painter.setBrush(Qt::NoBrush);
        painter.drawRect(QRectF(rect()).adjusted(2, 2, -2, -2));
    }
}

void CircuitStrip::mousePressEvent(QMouseEvent* event) {
    for (const Tag& tag : tags()) {
        const QPointF to = event->position() - tag.anchor;
        if (tag.box.contains(event->position()) || std::hypot(to.x(), to.y()) < 18) {
            choose(tag.seat);
            return;
        }
    }
}

void CircuitStrip::keyPressEvent(QKeyEvent* event) {
    const std::vector<Seat> seats = seats_in_order();
    const auto now = std::find(seats.begin(), seats.end(), chosen_);
    if (event->key() == Qt::Key_Right && now != seats.end() && now + 1 != seats.end()) choose(*(now + 1));
    else if (event->key() == Qt::Key_Left && now != seats.end() && now != seats.begin()) choose(*(now - 1));
    else QWidget::keyPressEvent(event);
}

}  // namespace binwright
