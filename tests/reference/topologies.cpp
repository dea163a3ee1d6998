// SPDX-License-Identifier: GPL-3.0-or-later
// Kirchhoff's laws of each converter, written out by hand for each position of its switch and rectifier.
// Nodes: "a" is the switch node; "b" the other end of the coupling capacitor. Circuits as in Erickson & Maksimovic,
// Fundamentals of Power Electronics, ch. 2, 5 and 6.
#include "tests/reference/topologies.hpp"

#include <cmath>

namespace reference {
namespace {

/// A bank of capacitors in parallel, beside a conductance, into which `feed` flows: its terminal voltage, and all
/// rates.
double bank(const std::vector<Capacitor>& branches, const double* v, double* dv, double feed, double conductance,
            std::array<double, kMostBranches>& currents, double& total) {
    const size_t n = branches.size();
    size_t direct = n;  // the branch without ESR, if any, is the terminal
    for (size_t k = 0; k < n; ++k)
        if (branches[k].r == 0) direct = k;
    double terminal = 0;
    if (direct < n) {
        terminal = v[direct];
    } else {
        double g = conductance, i = feed;
        for (size_t k = 0; k < n; ++k) {
            g += 1 / branches[k].r;
            i += v[k] / branches[k].r;
        }
        terminal = i / g;
    }
    total = feed - conductance * terminal;
    double others = 0;
    for (size_t k = 0; k < n; ++k)
        if (k != direct) {
            currents[k] = (terminal - v[k]) / branches[k].r;
            others += currents[k];
        }
    if (direct < n) currents[direct] = total - others;
    for (size_t k = 0; k < n; ++k) dv[k] = currents[k] / branches[k].C;
    return terminal;
}

struct Probe {
    const Converter& c;
    const States& s;
    const Constants& u;
    const double* x;
    double* dx;
    Wave& w;

    /// Source and input bank, from which the converter draws `i`.
    void draw(double i) {
        if (c.feed == Feed::stiff || c.cin.empty()) {
            w.v_in = c.vin;
            w.i_source = i;
        } else if (c.feed == Feed::mean) {
            w.i_source = u.source_current;
            w.v_in = bank(c.cin, x + s.cin, dx + s.cin, u.source_current - i, 0, w.cin, w.i_cin);
        } else if (c.source_L > 0) {
            w.i_source = x[2];
            w.v_in = bank(c.cin, x + s.cin, dx + s.cin, x[2] - i, 0, w.cin, w.i_cin);
            dx[2] = (c.vin - c.source_R * x[2] - w.v_in) / c.source_L;
        } else {
            w.v_in = bank(c.cin, x + s.cin, dx + s.cin, c.vin / c.source_R - i, 1 / c.source_R, w.cin, w.i_cin);
            w.i_source = (c.vin - w.v_in) / c.source_R;
            w.i_cin = w.i_source - i;
        }
    }
    /// Output bank and load, into which the converter delivers `i`.
    void deliver(double i) {
        const double g = c.load == LoadKind::resistance ? 1 / c.load_value : 0;
        w.v_out = bank(c.co, x + s.co, dx + s.co, i - u.load_current, g, w.co, w.i_co);
        w.i_load = u.load_current + g * w.v_out;
    }
    /// Coupling bank, charged by `i`.
    void couple(double i) { w.v_cs = bank(c.cs, x + s.cs, dx + s.cs, i, 0, w.cs, w.i_cs); }

    /// Two coupled windings on which v1 and v2 (resistive drop taken off) stand.
    void wind(double v1, double v2) {
        const double M = c.k * std::sqrt(c.L1 * c.L2), det = c.L1 * c.L2 - M * M;
        dx[0] = (c.L2 * v1 - M * v2) / det;
        dx[1] = (c.L1 * v2 - M * v1) / det;
    }

    [[nodiscard]] double on_resistance() const { return c.r_switch + c.r_sense; }
    [[nodiscard]] double forward(double i) const { return c.vt0 + c.rd * i; }

    // Switch from input to a, rectifier from ground to a, winding from a to the output.
    void buck(Position p) {
        const double i = x[0];
        w.i1 = i;
        draw(p == Position::on ? i : 0);
        deliver(i);
        double a = w.v_out;  // idle: no current, no voltage on the winding
        if (p == Position::on) {
            w.i_switch = i;
            a = w.v_in - on_resistance() * i;
        } else if (p == Position::conducting) {
            w.i_rectifier = i;
            a = -forward(i);
        }
        if (p != Position::idle) dx[0] = (a - c.R1 * i - w.v_out) / c.L1;
        w.v_ds = w.v_in - a;
        w.v_r = a;
    }

    // Winding from input to a, switch from a to ground, rectifier from a to the output.
    void boost(Position p) {
        const double i = x[0];
        w.i1 = i;
        draw(i);
        deliver(p == Position::conducting ? i : 0);
        double a = w.v_in;
        if (p == Position::on) {
            w.i_switch = i;
            a = on_resistance() * i;
        } else if (p == Position::conducting) {
            w.i_rectifier = i;
            a = w.v_out + forward(i);
        }
        if (p != Position::idle) dx[0] = (w.v_in - c.R1 * i - a) / c.L1;
        w.v_ds = a;
        w.v_r = w.v_out - a;
    }

    // Switch from input to a, winding from a to ground, rectifier from the negative output to a.
    void inverting(Position p) {
        const double i = x[0];
        w.i1 = i;
        draw(p == Position::on ? i : 0);
        deliver(p == Position::conducting ? i : 0);
        double a = 0;
        if (p == Position::on) {
            w.i_switch = i;
            a = w.v_in - on_resistance() * i;
        } else if (p == Position::conducting) {
            w.i_rectifier = i;
            a = -w.v_out - forward(i);
        }
        if (p != Position::idle) dx[0] = (a - c.R1 * i) / c.L1;
        w.v_ds = w.v_in - a;
        w.v_r = a + w.v_out;
    }

    // Winding 1 from input to a, switch from a to ground, C_s from a (+) to b, winding 2 from ground to b, rectifier
    // from b to the output.
    void sepic(Position p) {
        const double i1 = x[0], i2 = x[1];
        w.i1 = i1;
        w.i2 = i2;
        draw(i1);
        if (p == Position::on) {
            deliver(0);
            couple(-i2);
            w.i_switch = i1 + i2;
            const double a = on_resistance() * (i1 + i2), b = a - w.v_cs;
            wind(w.v_in - a - c.R1 * i1, -b - c.R2 * i2);
            w.v_ds = a;
            w.v_r = w.v_out - b;
        } else if (p == Position::conducting) {
            deliver(i1 + i2);
            couple(i1);
            w.i_rectifier = i1 + i2;
            const double b = w.v_out + forward(i1 + i2), a = b + w.v_cs;
            wind(w.v_in - a - c.R1 * i1, -b - c.R2 * i2);
            w.v_ds = a;
            w.v_r = w.v_out - b;
        } else {  // one loop: input, winding 1, C_s, winding 2 backwards; i1 = −i2
            deliver(0);
            couple(i1);
            const double M = c.k * std::sqrt(c.L1 * c.L2);
            const double rate = (w.v_in - w.v_cs - (c.R1 + c.R2) * i1) / (c.L1 + c.L2 - 2 * M);
            dx[0] = rate;
            dx[1] = -rate;
            const double b = (c.L2 - M) * rate + c.R2 * i1;
            w.v_ds = b + w.v_cs;
            w.v_r = w.v_out - b;
        }
    }

    // Winding 1 from input to a, switch from a to ground, C_s from a (+) to b, rectifier from b to ground, winding 2
    // from the negative output to b.
    void cuk(Position p) {
        const double i1 = x[0], i2 = x[1];
        w.i1 = i1;
        w.i2 = i2;
        draw(i1);
        deliver(i2);
        if (p == Position::on) {
            couple(-i2);
            w.i_switch = i1 + i2;
            const double a = on_resistance() * (i1 + i2), b = a - w.v_cs;
            wind(w.v_in - a - c.R1 * i1, -w.v_out - b - c.R2 * i2);
            w.v_ds = a;
            w.v_r = -b;
        } else if (p == Position::conducting) {
            couple(i1);
            w.i_rectifier = i1 + i2;
            const double b = forward(i1 + i2), a = b + w.v_cs;
            wind(w.v_in - a - c.R1 * i1, -w.v_out - b - c.R2 * i2);
            w.v_ds = a;
            w.v_r = -b;
        } else {
            couple(i1);
            const double M = c.k * std::sqrt(c.L1 * c.L2);
            const double rate = (w.v_in - w.v_cs + w.v_out - (c.R1 + c.R2) * i1) / (c.L1 + c.L2 - 2 * M);
            dx[0] = rate;
            dx[1] = -rate;
            const double b = -w.v_out + c.R2 * i1 + (c.L2 - M) * rate;
            w.v_ds = b + w.v_cs;
            w.v_r = -b;
        }
    }

    // Switch from input to a, winding 1 from a to ground, C_s from b (+) to a, rectifier from ground to b, winding 2
    // from b to the output.
    void zeta(Position p) {
        const double i1 = x[0], i2 = x[1];
        w.i1 = i1;
        w.i2 = i2;
        draw(p == Position::on ? i1 + i2 : 0);
        deliver(i2);
        double a = 0, b = 0;
        if (p == Position::on) {
            couple(-i2);
            w.i_switch = i1 + i2;
            a = w.v_in - on_resistance() * (i1 + i2);
            b = a + w.v_cs;
            wind(a - c.R1 * i1, b - w.v_out - c.R2 * i2);
        } else if (p == Position::conducting) {
            couple(i1);
            w.i_rectifier = i1 + i2;
            b = -forward(i1 + i2);
            a = b - w.v_cs;
            wind(a - c.R1 * i1, b - w.v_out - c.R2 * i2);
        } else {
            couple(i1);
            const double M = c.k * std::sqrt(c.L1 * c.L2);
            const double rate = (w.v_out - w.v_cs - (c.R1 + c.R2) * i1) / (c.L1 + c.L2 - 2 * M);
            dx[0] = rate;
            dx[1] = -rate;
            a = c.R1 * i1 + (c.L1 - M) * rate;
            b = a + w.v_cs;
        }
        w.v_ds = w.v_in - a;
        w.v_r = b;
    }

    // Primary from input to the switch, switch to ground; secondary from ground through the rectifier to the output,
    // wound so that it blocks while the switch is on.
    void flyback(Position p) {
        const double n = c.n;
        if (c.k == 1) {  // no leakage: the magnetising current x[0] flows in one winding or the other
            const double i = x[0];
            if (p == Position::on) {
                w.i1 = w.i_switch = i;
                draw(i);
                deliver(0);
                const double v = w.v_in - (c.R1 + on_resistance()) * i;  // across the magnetising inductance
                dx[0] = v / c.L1;
                w.v_ds = on_resistance() * i;
                w.v_r = w.v_out + n * v;
            } else if (p == Position::conducting) {
                w.i2 = w.i_rectifier = i / n;
                draw(0);
                deliver(w.i2);
                const double v = -(w.v_out + forward(w.i2) + c.R2 * w.i2) / n;
                dx[0] = v / c.L1;
                w.v_ds = w.v_in - v;
                w.v_r = -forward(w.i2);
            } else {
                draw(0);
                deliver(0);
                w.v_ds = w.v_in;
                w.v_r = w.v_out;
            }
            return;
        }
        const double L2 = c.L1 * n * n, M = c.k * c.L1 * n, i1 = x[0], i2 = x[1];
        w.i1 = i1;
        w.i2 = i2;
        draw(i1);
        deliver(i2);
        const double v1 = w.v_in - (c.R1 + on_resistance()) * i1;
        const double v2 = -(w.v_out + forward(i2) + c.R2 * i2);
        switch (p) {
            case Position::on:
                w.i_switch = i1;
                dx[0] = v1 / c.L1;
                w.v_ds = on_resistance() * i1;
                w.v_r = w.v_out + M * dx[0];
                break;
            case Position::commutating: {
                w.i_switch = i1;
                w.i_rectifier = i2;
                const double det = c.L1 * L2 - M * M;
                dx[0] = (L2 * v1 - M * v2) / det;
                dx[1] = (c.L1 * v2 - M * v1) / det;
                w.v_ds = on_resistance() * i1;
                w.v_r = -forward(i2);
                break;
            }
            case Position::conducting:
                w.i_rectifier = i2;
                dx[1] = v2 / L2;
                w.v_ds = w.v_in - M * dx[1];
                w.v_r = -forward(i2);
                break;
            case Position::idle:
                w.v_ds = w.v_in;
                w.v_r = w.v_out;
                break;
        }
    }
};

}  // namespace

void probe(const Converter& c, const States& s, const Constants& u, Position position, const double* x, double* dx,
           Wave& w) {
    for (int k = 0; k < s.count; ++k) dx[k] = 0;
    w = Wave{};
    Probe p{c, s, u, x, dx, w};
    switch (c.kind) {
        case Kind::buck:
            p.buck(position);
            break;
        case Kind::boost:
            p.boost(position);
            break;
        case Kind::inverting:
            p.inverting(position);
            break;
        case Kind::sepic:
            p.sepic(position);
            break;
        case Kind::cuk:
            p.cuk(position);
            break;
        case Kind::zeta:
            p.zeta(position);
            break;
        case Kind::flyback:
            p.flyback(position);
            break;
    }
}

double turn_off(const Converter& c, double* x) {
    if (c.kind != Kind::flyback || c.k == 1) return 0;
    // The primary is interrupted; the flux linkage of the secondary, M·i1 + L2·i2, stays.
    const double L2 = c.L1 * c.n * c.n, M = c.k * c.L1 * c.n;
    const auto energy = [&] { return 0.5 * c.L1 * x[0] * x[0] + M * x[0] * x[1] + 0.5 * L2 * x[1] * x[1]; };
    const double before = energy();
    x[1] += M / L2 * x[0];
    x[0] = 0;
    return before - energy();
}

void stop_rectifier(const Converter& c, double* x) {
    if (four_elements(c.kind)) {
        const double circulating = (x[0] - x[1]) / 2;
        x[0] = circulating;
        x[1] = -circulating;
    } else if (c.kind == Kind::flyback && c.k < 1) {
        x[1] = 0;
    } else {
        x[0] = 0;
    }
}

}  // namespace reference
