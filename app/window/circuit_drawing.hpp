// SPDX-License-Identifier: GPL-3.0-or-later
// Drawing a topology from its table: rails where its nodes are, a symbol (IEC 60617) on every branch.
#pragma once
#include <QPainter>
#include <QRectF>
#include <functional>

#include "engine/network/topology.hpp"

namespace binwright {

struct CircuitStyle {
    QColor wire, accent;
    double width = 1.4;
    /// Mean current of a branch in the interval shown; empty function: all branches alike.
    std::function<double(const Branch&)> current;
};

/// Where a branch stands within `area`: its two ends.
struct BranchPlace {
    QPointF from, to;
    [[nodiscard]] QPointF middle() const { return 0.5 * (from + to); }
};
[[nodiscard]] BranchPlace place_of(const Topology& topology, const Branch& branch, const QRectF& area);

void draw_circuit(QPainter& painter, const Topology& topology, const QRectF& area, const CircuitStyle& style);

}  // namespace binwright
