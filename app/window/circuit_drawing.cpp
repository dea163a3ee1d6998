// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/circuit_drawing.hpp"

#include <QPainterPath>
#include <cmath>

namespace binwright {
namespace {

double span_of(const Topology& topology) {
    float most = 1;
    for (const Node& node : topology.nodes) most = std::max(most, node.x_to);
    return most;
}

QPointF point(const Topology& topology, const QRectF& area, double x, double y) {
    return {area.left() + x / span_of(topology) * area.width(), area.top() + y / 2.0 * area.height()};
}

void draw_winding(QPainter& p, double length) {
    const double r = length / 8;
    QPainterPath path(QPointF(-length / 2, 0));
    for (int k = 0; k < 4; ++k) path.arcTo(QRectF(-length / 2 + 2 * r * k, -r, 2 * r, 2 * r), 180, -180);
    p.drawPath(path);
}

void draw_capacitor(QPainter& p, double length) {
    const double gap = length * 0.09, plate = length * 0.32;
    p.drawLine(QPointF(-length / 2, 0), QPointF(-gap, 0));
    p.drawLine(QPointF(gap, 0), QPointF(length / 2, 0));
    p.drawLine(QPointF(-gap, -plate), QPointF(-gap, plate));
    p.drawLine(QPointF(gap, -plate), QPointF(gap, plate));
}

void draw_rectifier(QPainter& p, double length) {
    const double r = length * 0.22;
    p.drawLine(QPointF(-length / 2, 0), QPointF(length / 2, 0));
    QPolygonF triangle({QPointF(-r, -r), QPointF(-r, r), QPointF(r, 0)});
    p.drawPolygon(triangle);
    p.drawLine(QPointF(r, -r), QPointF(r, r));
}

void draw_switch(QPainter& p, double length) {
    // Enhancement-type N-channel MOSFET, drain at the left end, gate below.
    const double a = length * 0.2, h = length * 0.24;
    p.drawLine(QPointF(-length / 2, 0), QPointF(-a, 0));
    p.drawLine(QPointF(-a, 0), QPointF(-a, h));
    p.drawLine(QPointF(a, 0), QPointF(length / 2, 0));
    p.drawLine(QPointF(a, 0), QPointF(a, h));
    for (const double x : {-a, 0.0, a}) p.drawLine(QPointF(x - a * 0.36, h), QPointF(x + a * 0.36, h));
    p.drawLine(QPointF(-a * 1.3, h * 1.35), QPointF(a * 1.3, h * 1.35));
    p.drawLine(QPointF(a * 1.3, h * 1.35), QPointF(a * 1.3, h * 2.0));
    p.drawLine(QPointF(0, h), QPointF(0, 0));
    p.drawLine(QPointF(0, 0), QPointF(a, 0));
    QPolygonF arrow({QPointF(0, h * 0.95), QPointF(-a * 0.22, h * 0.5), QPointF(a * 0.22, h * 0.5)});
    p.save();
    p.setBrush(p.pen().color());
    p.drawPolygon(arrow);
    p.restore();
}

void draw_load(QPainter& p, double length) {
    const double a = length * 0.28, h = length * 0.11;
    p.drawLine(QPointF(-length / 2, 0), QPointF(-a, 0));
    p.drawLine(QPointF(a, 0), QPointF(length / 2, 0));
    p.drawRect(QRectF(-a, -h, 2 * a, 2 * h));
}

void draw_source(QPainter& p, double length) {
    const double gap = length * 0.06;
    p.drawLine(QPointF(-length / 2, 0), QPointF(-gap, 0));
    p.drawLine(QPointF(gap, 0), QPointF(length / 2, 0));
    p.drawLine(QPointF(-gap, -length * 0.28), QPointF(-gap, length * 0.28));
    p.drawLine(QPointF(gap, -length * 0.14), QPointF(gap, length * 0.14));
}

}  // namespace

BranchPlace place_of(const Topology& topology, const Branch& branch, const QRectF& area) {
    const Node &a = topology.nodes[branch.from], &b = topology.nodes[branch.to];
    if (a.y != b.y) return {point(topology, area, branch.x, a.y), point(topology, area, branch.x, b.y)};
    const bool left = a.x_to <= b.x_from;
    return {point(topology, area, left ? a.x_to : a.x_from, a.y), point(topology, area, left ? b.x_from : b.x_to, b.y)};
}

void draw_circuit(QPainter& painter, const Topology& topology, const QRectF& area, const CircuitStyle& style) {
    painter.save();
    painter.setRenderHint(QPainter::Antialiasing);
    const QPen plain(style.wire, style.width, Qt::SolidLine, Qt::RoundCap, Qt::RoundJoin);
    painter.setPen(plain);
    painter.setBrush(Qt::NoBrush);
    for (const Node& node : topology.nodes)
        if (node.x_to > node.x_from) painter.drawLine(point(topology, area, node.x_from, node.y), point(topology, area, node.x_to, node.y));

    double largest = 0;
    if (style.current)
        for (const Branch& branch : topology.branches) largest = std::max(largest, std::abs(style.current(branch)));
    const double unit = std::min(area.width() / span_of(topology) * 0.95, area.height() * 0.5);
    for (const Branch& branch : topology.branches) {
        const BranchPlace place = place_of(topology, branch, area);
        const QPointF along = place.to - place.from;
        const double distance = std::hypot(along.x(), along.y());
        if (!(distance > 0)) continue;
        const double current = style.current ? style.current(branch) : 0;
        const bool flows = style.current && std::abs(current) > 1e-3 * largest;
        QPen pen = plain;
        if (flows) {
            pen.setWidthF(style.width * 2.2);
            pen.setColor(style.accent);
        }
        painter.setPen(pen);
        painter.save();
        painter.translate(place.middle());
        painter.rotate(std::atan2(along.y(), along.x()) * 180 / M_PI);
        const double length = std::min(unit, distance);
        painter.drawLine(QPointF(-distance / 2, 0), QPointF(-length / 2, 0));
        painter.drawLine(QPointF(length / 2, 0), QPointF(distance / 2, 0));
        switch (branch.kind) {
            case BranchKind::primary:
            case BranchKind::secondary: draw_winding(painter, length); break;
            case BranchKind::capacitor: draw_capacitor(painter, length); break;
            case BranchKind::rectifier: draw_rectifier(painter, length); break;
            case BranchKind::switch_: draw_switch(painter, length); break;
            case BranchKind::load: draw_load(painter, length); break;
            case BranchKind::source: draw_source(painter, length); break;
        }
        if (flows) {  // an arrowhead the way the current goes
            const double at = distance / 2 * 0.8, size = style.width * 3.2, way = current > 0 ? 1 : -1;
            painter.setBrush(style.accent);
            painter.setPen(Qt::NoPen);
            painter.drawPolygon(QPolygonF({QPointF(at + way * size, 0), QPointF(at - way * size, -size), QPointF(at - way * size, size)}));
        }
        painter.restore();
    }
    painter.restore();
}

}  // namespace binwright
