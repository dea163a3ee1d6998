// SPDX-License-Identifier: GPL-3.0-or-later
#include "tests/reference/closed_formulas.hpp"

#include <algorithm>
#include <cmath>

namespace reference {
namespace {

double ramp(double middle, double d) {
    return middle * middle + d * d / 12;
}  // mean square of a ramp
double line(double a, double b) {
    return (a * a + a * b + b * b) / 3;
}  // mean square of a straight line a → b

}  // namespace

std::map<std::string, double> closed_formulas(const Ideal& c) {
    const double T = 1 / c.f, D = c.duty, V = c.vin, R = c.load;
    const bool four = four_elements(c.kind), flyback = c.kind == Kind::flyback, buck = c.kind == Kind::buck,
               boost = c.kind == Kind::boost;
    const double n = flyback ? 1 / c.n : 1;  // N_primary/N_secondary
    const double Le = four ? c.L1 * c.L2 / (c.L1 + c.L2) : c.L1;
    const double K = 2 * Le / (n * n * R * T);
    // Voltage ratio: continuous, critical K, and discontinuous (Erickson & Maksimovic, table 5.2).
    const double critical = buck ? 1 - D : boost ? D * (1 - D) * (1 - D) : (1 - D) * (1 - D);
    const bool continuous = K >= critical;
    double M = 0, D2 = 0;  // flyback: M = n·V_o/V_in
    if (buck) {
        M = continuous ? D : 2 / (1 + std::sqrt(1 + 4 * K / (D * D)));
        D2 = continuous ? 1 - D : D * (1 - M) / M;
    } else if (boost) {
        M = continuous ? 1 / (1 - D) : (1 + std::sqrt(1 + 4 * D * D / K)) / 2;
        D2 = continuous ? 1 - D : D / (M - 1);
    } else {
        M = continuous ? D / (1 - D) : D / std::sqrt(K);
        D2 = continuous ? 1 - D : D / M;
    }
    const double Vo = M * V / n, Io = Vo / R, Iin = Vo * Io / V;
    std::map<std::string, double> f;
    f["output_voltage_average"] = Vo;
    f["input_current_average"] = Iin;
    f["rectifier_fraction"] = D2;
    f["switch.voltage_peak"] = buck ? V : boost ? Vo : V + n * Vo;
    f["rectifier.reverse_voltage_peak"] = buck ? V : boost ? Vo : flyback ? Vo + V / n : V + Vo;

    double middle = 0, d = 0, peak = 0, valley = 0;  // of what switch and rectifier share
    double coupling_step = 0, output_step = 0;
    if (four) {
        const double d1 = V * D * T / c.L1, d2 = V * D * T / c.L2;
        d = d1 + d2;
        double v1 = Iin - d1 / 2, v2 = Io - d2 / 2;
        if (!continuous) {
            v1 = Iin - d1 * (D + D2) / 2;
            v2 = -v1;
        }
        const double square1 = continuous ? ramp(Iin, d1) : (D + D2) * line(v1, v1 + d1) + (1 - D - D2) * v1 * v1;
        const double square2 = continuous ? ramp(Io, d2) : (D + D2) * line(v2, v2 + d2) + (1 - D - D2) * v2 * v2;
        middle = continuous ? Iin + Io : d / 2;
        valley = continuous ? middle - d / 2 : 0;
        peak = middle + d / 2;
        f["primary.current_average"] = Iin;
        f["primary.current_rms"] = std::sqrt(square1);
        f["primary.current_peak"] = v1 + d1;
        f["primary.current_min"] = v1;
        f["secondary.current_average"] = Io;
        f["secondary.current_rms"] = std::sqrt(square2);
        f["secondary.current_peak"] = v2 + d2;
        f["secondary.current_min"] = v2;
        const double square_c = continuous ? D * ramp(Io, d2) + (1 - D) * ramp(Iin, d1)
                                           : D * line(v2, v2 + d2) + D2 * line(v1, v1 + d1) + (1 - D - D2) * v1 * v1;
        f["coupling_capacitor.current_rms"] = std::sqrt(square_c);
        f["coupling_capacitor.voltage_average"] = c.kind == Kind::sepic ? V : c.kind == Kind::cuk ? V + Vo : Vo;
        if (continuous) {
            coupling_step = Io * D * T / c.Cs;
        } else {
            const double i1 = v1 + d1, i2 = v2 + d2;
            coupling_step = v1 >= 0 ? i2 * i2 * c.L2 / (2 * V * c.Cs) : i1 * i1 * c.L1 / (2 * Vo * c.Cs);
        }
        f["coupling ripple"] = coupling_step;
        if (c.kind != Kind::zeta) f["input_capacitor.current_rms"] = std::sqrt(std::max(0.0, square1 - Iin * Iin));
        if (c.kind != Kind::sepic) f["output_capacitor.current_rms"] = std::sqrt(std::max(0.0, square2 - Io * Io));
        if (c.kind != Kind::sepic)
            output_step =
                continuous ? d2 / (8 * c.f * c.Co) : std::pow(v2 + d2 - Io, 2) / (2 * c.Co) * (c.L2 / V + c.L2 / Vo);
    } else {
        d = buck ? (V - Vo) * D * T / c.L1 : V * D * T / c.L1;
        const double I = buck ? Io : boost ? Iin : Iin / D;
        middle = continuous ? I : d / 2;
        peak = continuous ? I + d / 2 : d;
        valley = continuous ? I - d / 2 : 0;
        const double average = continuous ? I : d * (D + D2) / 2;
        const double square = continuous ? ramp(I, d) : d * d * (D + D2) / 3;
        const std::string winding = flyback ? "magnetising" : "primary";
        f[winding + ".current_average"] = average;
        f[winding + ".current_rms"] = std::sqrt(square);
        f[winding + ".current_peak"] = peak;
        f[winding + ".current_min"] = valley;
        if (boost) f["input_capacitor.current_rms"] = std::sqrt(square - average * average);
        if (buck) f["output_capacitor.current_rms"] = std::sqrt(square - average * average);
        if (buck) {
            output_step =
                continuous ? d / (8 * c.f * c.Co) : std::pow(peak - Io, 2) / (2 * c.Co) * (c.L1 / (V - Vo) + c.L1 / Vo);
        }
    }
    f["switch.current_average"] = D * middle;
    f["switch.current_rms"] = std::sqrt(D * ramp(middle, d));
    f["switch.current_peak"] = peak;
    f["switch.current_turn_on"] = valley;
    f["switch.current_turn_off"] = peak;
    f["rectifier.current_average"] = n * D2 * middle;
    f["rectifier.current_rms"] = n * std::sqrt(D2 * ramp(middle, d));
    f["rectifier.current_peak"] = n * peak;
    const auto rest = [](double rms, double mean) { return std::sqrt(rms * rms - mean * mean); };
    if (!f.count("input_capacitor.current_rms")) f["input_capacitor.current_rms"] = rest(f["switch.current_rms"], Iin);
    if (!f.count("output_capacitor.current_rms"))
        f["output_capacitor.current_rms"] = rest(f["rectifier.current_rms"], Io);
    if (output_step == 0) {  // fed by the rectifier
        const double slope = boost                   ? (Vo - V) / c.L1
                             : flyback               ? n * n * Vo / c.L1
                             : c.kind == Kind::sepic ? Vo / Le
                                                     : Vo / c.L1;
        output_step = n * valley >= Io ? Io * D * T / c.Co : std::pow(n * peak - Io, 2) / (2 * slope * c.Co);
    }
    f["output_ripple"] = output_step;
    return f;
}

Converter ideal_converter(const Ideal& c) {
    Converter r;
    r.name = "ideal";
    r.kind = c.kind;
    r.feed = Feed::mean;
    r.vin = c.vin;
    r.duty = c.duty;
    r.load = LoadKind::resistance;
    r.load_value = c.load;
    r.f = c.f;
    r.L1 = c.L1;
    r.L2 = c.L2;
    r.k = c.kind == Kind::flyback ? 1 : 0;
    r.n = c.n;
    r.cin = {{c.Cin, 0}};
    if (four_elements(c.kind)) r.cs = {{c.Cs, 0}};
    r.co = {{c.Co, 0}};
    return r;
}

}  // namespace reference
